import { backgroundPart, backgroundTimes, fitBackground } from "../background/background.ts";
import { runningMean, runningMeanHalo } from "../background/running-mean.ts";
import type { BackgroundSpec } from "../background/spec.ts";
import { RADIANS_PER_DEGREE } from "../constants.ts";
import type { StepAxis } from "../field/axes.ts";
import { reasonCode } from "../field/reasons.ts";
import type { Coordinate, Diagnostic, OptionValues, Outcome, ResultVariable, Series } from "./entry.ts";

const MISSING = reasonCode("missing");
const SHORT = reasonCode("short");
const EDGE = reasonCode("edge");
const MAP = ["level", "latitude", "longitude"];

function specOf(options: OptionValues): BackgroundSpec {
  switch (options.mean) {
    case "annual-cycle":
      return { kind: "annual-cycle", harmonics: options.harmonics as number };
    case "running-mean":
      return { kind: "running-mean", days: options.days as number };
    default:
      return { kind: "record-mean" };
  }
}

/** The record cut down to the steps that the recipe selects, so that sums and phases see those alone. */
function selected(series: Series): StepAxis {
  return { ...series.steps, values: series.steps.values.slice(series.times[0], series.times[1]) };
}

function axes(series: Series): Coordinate[] {
  const level: Coordinate[] =
    series.levels === null
      ? []
      : [
          {
            name: "level",
            values: series.levels,
            units: "hPa",
            attributes: { standard_name: "air_pressure", positive: "down" },
          },
        ];
  return [
    ...level,
    {
      name: "latitude",
      values: series.grid.lat.slice(),
      units: "degrees_north",
      attributes: { standard_name: "latitude" },
    },
    {
      name: "longitude",
      values: series.grid.lon.slice(),
      units: "degrees_east",
      attributes: { standard_name: "longitude" },
    },
  ];
}

function withoutAbsentLevel(series: Series, dims: readonly string[]): string[] {
  return dims.filter((dim) => dim !== "level" || series.levels !== null);
}

function shapeOf(series: Series): number[] {
  return [...(series.levels === null ? [] : [series.levels.length]), series.grid.lat.length, series.grid.lon.length];
}

function map(
  series: Series,
  name: string,
  title: string,
  units: string,
  data: Float64Array,
  absent: number,
  lead: readonly [string, number] | null = null,
): ResultVariable {
  const reasons = Uint8Array.from(data, (value) => (Number.isNaN(value) ? absent : 0));
  const dims = [...(lead === null ? [] : [lead[0]]), ...withoutAbsentLevel(series, MAP)];
  const shape = [...(lead === null ? [] : [lead[1]]), ...shapeOf(series)];
  return { name, title, units, dims, shape, data, ...(reasons.some((code) => code !== 0) ? { reasons } : {}) };
}

function fittedOutcome(parts: Parameters<Diagnostic["finish"]>[0], series: Series, spec: BackgroundSpec): Outcome {
  const steps = selected(series);
  const fitted = fitBackground(parts, { steps, background: spec, grid: series.grid }, [0, series.grid.lat.length]);
  const cells = fitted.coefficients.length / fitted.nCoefficients;
  const missing = new Float64Array(cells);
  for (const part of parts) {
    const own = part.missing as Float64Array;
    for (let c = 0; c < cells; c++) missing[c] = (missing[c] as number) + (own[c] as number);
  }
  const absent = spec.kind === "annual-cycle" ? SHORT : MISSING;
  const count = missing.map((n) => steps.values.length - n);
  const coordinates = axes(series);
  const variables = [
    map(
      series,
      "mean",
      spec.kind === "annual-cycle" ? "Mean over the year" : "Mean",
      series.units,
      fitted.coefficients.slice(0, cells),
      absent,
    ),
    map(series, "count", "Values used", "1", count, MISSING),
  ];
  if (spec.kind === "annual-cycle") {
    const n = spec.harmonics;
    const amplitude = new Float64Array(n * cells);
    const peak = new Float64Array(n * cells);
    for (let h = 1; h <= n; h++) {
      for (let c = 0; c < cells; c++) {
        const a = fitted.coefficients[(2 * h - 1) * cells + c] as number;
        const b = fitted.coefficients[2 * h * cells + c] as number;
        amplitude[(h - 1) * cells + c] = Math.sqrt(a * a + b * b);
        const phase = Math.atan2(b, a) / RADIANS_PER_DEGREE / 360 / h;
        peak[(h - 1) * cells + c] = phase < 0 ? phase + 1 / h : phase;
      }
    }
    coordinates.unshift({
      name: "harmonic",
      values: Float64Array.from({ length: n }, (_, i) => i + 1),
      units: "1",
      attributes: { long_name: "harmonic of the year" },
    });
    variables.push(
      map(series, "amplitude", "Amplitude of the harmonic", series.units, amplitude, absent, ["harmonic", n]),
      map(series, "peak", "Part of the year at which the harmonic is first largest", "1", peak, absent, [
        "harmonic",
        n,
      ]),
    );
  }
  return { coordinates, variables, notes: [] };
}

function runningOutcome(parts: Parameters<Diagnostic["finish"]>[0], series: Series, spec: BackgroundSpec): Outcome {
  const { steps, times } = series;
  const arrays = parts.map((part) => part.mean as Float64Array);
  const data = new Float64Array(arrays.reduce((sum, array) => sum + array.length, 0));
  let at = 0;
  for (const array of arrays) {
    data.set(array, at);
    at += array.length;
  }
  const n = times[1] - times[0];
  const half = runningMeanHalo(spec, steps);
  const cells = data.length / n;
  const reasons = new Uint8Array(data.length);
  for (let t = 0; t < n; t++) {
    const step = times[0] + t;
    const edge = step < half || step + half >= steps.values.length;
    for (let c = 0; c < cells; c++)
      if (Number.isNaN(data[t * cells + c])) reasons[t * cells + c] = edge ? EDGE : MISSING;
  }
  const time: Coordinate = {
    name: "time",
    values: steps.values.slice(times[0], times[1]),
    units: "days since 1970-01-01 00:00:00",
    attributes: { standard_name: "time", calendar: steps.calendar },
  };
  const variable: ResultVariable = {
    name: "mean",
    title: "Running mean",
    units: series.units,
    dims: ["time", ...withoutAbsentLevel(series, MAP)],
    shape: [n, ...shapeOf(series)],
    data,
    ...(reasons.some((code) => code !== 0) ? { reasons } : {}),
  };
  const lost =
    Math.min(n, Math.max(0, half - times[0])) + Math.min(n, Math.max(0, times[1] + half - steps.values.length));
  const notes =
    lost > 0 ? [`${lost} steps lie within ${half} steps of the record's ends and have no centred mean.`] : [];
  return { coordinates: [time, ...axes(series)], variables: [variable], notes };
}

export const climatology: Diagnostic = {
  id: "climatology",
  title: "Climatology",
  summary: "What is usual: the mean of a record or a period, its annual cycle, or its running mean.",
  formula:
    "<mrow><mover><mi>x</mi><mo>¯</mo></mover><mo>(</mo><mi>t</mi><mo>)</mo><mo>=</mo><msub><mi>a</mi><mn>0</mn></msub><mo>+</mo><munderover><mo>∑</mo><mrow><mi>h</mi><mo>=</mo><mn>1</mn></mrow><mi>n</mi></munderover>" +
    "<mo>(</mo><msub><mi>a</mi><mi>h</mi></msub><mi>cos</mi><mn>2</mn><mi>π</mi><mi>h</mi><mi>p</mi><mo>+</mo><msub><mi>b</mi><mi>h</mi></msub><mi>sin</mi><mn>2</mn><mi>π</mi><mi>h</mi><mi>p</mi><mo>)</mo></mrow>",
  validity:
    "A mean needs one value. An annual cycle of n harmonics needs values on 2n + 1 different days of the year. A running mean needs even steps, is centred, and has no value nearer to the record's ends than half its window, or where its window misses a value.",
  sources: [
    "Least squares on harmonics of the year, phase (day of year − 1 + h/24)/length of the year in the file's calendar: common practice",
  ],
  inputs: [{ name: "field", quantities: "any", about: "the field that is averaged" }],
  options: [
    {
      name: "mean",
      kind: "choice",
      title: "Mean",
      default: "record",
      choices: [
        { value: "record", title: "over the record, or over the result's period" },
        { value: "annual-cycle", title: "annual cycle by harmonics" },
        { value: "running-mean", title: "centred running mean" },
      ],
      about: "What kind of mean; a period is stated by the result's own key `period`.",
    },
    {
      name: "harmonics",
      kind: "integer",
      title: "Harmonics",
      default: 4,
      min: 1,
      max: 12,
      about: "Waves of the year, for an annual cycle.",
    },
    {
      name: "days",
      kind: "number",
      title: "Window",
      units: "days",
      default: 31,
      min: 0.25,
      max: 3660,
      about: "Length of a running mean; the largest odd number of steps within it.",
    },
  ],
  outputs: [
    {
      name: "mean",
      title: "Mean",
      units: "input",
      dims: MAP,
      about: "Mean of the steps, a₀ of an annual cycle, or (time, …) the running mean.",
    },
    {
      name: "count",
      title: "Values used",
      units: "1",
      dims: MAP,
      about: "How many steps had a value.",
      when: "mean is record or annual-cycle",
    },
    {
      name: "amplitude",
      title: "Amplitude of each harmonic",
      units: "input",
      dims: ["harmonic", ...MAP],
      about: "√(a² + b²).",
      when: "mean is annual-cycle",
    },
    {
      name: "peak",
      title: "Peak of each harmonic",
      units: "1",
      dims: ["harmonic", ...MAP],
      about: "Part of the year, from 1 January 00 UTC, at which it is first largest.",
      when: "mean is annual-cycle",
    },
  ],
  plan(series, options) {
    const spec = specOf(options);
    if (spec.kind !== "running-mean") {
      backgroundTimes(spec, series.steps);
      return { rows: [0, series.grid.lat.length], halo: 0, usesBackground: false };
    }
    return { rows: [0, series.grid.lat.length], halo: runningMeanHalo(spec, series.steps), usesBackground: false };
  },
  chunk(input, series, options) {
    const spec = specOf(options);
    const slab = input.slabs.field;
    if (slab === undefined) return {};
    if (spec.kind === "running-mean") return { mean: runningMean(slab, series.steps, input.loaded, input.times, spec) };
    return backgroundPart(spec, slab, series.steps, input.times);
  },
  finish(parts, series, options) {
    const spec = specOf(options);
    return spec.kind === "running-mean" ? runningOutcome(parts, series, spec) : fittedOutcome(parts, series, spec);
  },
};
