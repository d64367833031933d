import { backgroundPart, backgroundTimes } from "../background/background.ts";
import { runningMeanHalo } from "../background/running-mean.ts";
import type { BackgroundSpec } from "../background/spec.ts";
import type { Diagnostic, OptionValues } from "./entry.ts";
import { fittedMean, selectedSteps } from "./means/fitted-mean.ts";
import { MAP } from "./means/mean-map.ts";
import { movingMean, movingPart } from "./means/moving-mean.ts";

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

export const climatology: Diagnostic = {
  id: "climatology",
  title: "Climatology",
  summary: "What is usual: the mean of a record or a period, its annual cycle, or its running mean.",
  formula:
    "<mrow><mover><mi>x</mi><mo>¯</mo></mover><mo>(</mo><mi>t</mi><mo>)</mo><mo>=</mo><msub><mi>a</mi><mn>0</mn></msub><mo>+</mo><munderover><mo>∑</mo><mrow><mi>h</mi><mo>=</mo><mn>1</mn></mrow><mi>n</mi></munderover>" +
    "<mo>(</mo><msub><mi>a</mi><mi>h</mi></msub><mi>cos</mi><mn>2</mn><mi>π</mi><mi>h</mi><mi>p</mi><mo>+</mo><msub><mi>b</mi><mi>h</mi></msub><mi>sin</mi><mn>2</mn><mi>π</mi><mi>h</mi><mi>p</mi><mo>)</mo></mrow>",
  validity:
    "A mean needs one value. An annual cycle of n harmonics needs values on 2n + 1 different days of the year, spread widely enough to tell them apart, and holds for the part of the year that the record covers. A running mean needs even steps, is centred, and has no value nearer to the record's ends than half its window, or where its window misses a value.",
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
      name: "cycle_points",
      kind: "integer",
      title: "Points of the cycle",
      default: 12,
      min: 0,
      max: 366,
      about:
        "Equal parts of the year in whose middles the annual cycle is written; 12 are close to months, 0 for none.",
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
    {
      name: "cycle",
      title: "Annual cycle",
      units: "input",
      dims: ["part_of_year", ...MAP],
      about: "Mean and harmonics together in the middles of equal parts of the year.",
      when: "mean is annual-cycle and cycle_points is over 0",
    },
  ],
  plan(series, options) {
    const spec = specOf(options);
    const rows = [0, series.grid.lat.length] as const;
    if (spec.kind === "running-mean") return { rows, halo: runningMeanHalo(spec, series.steps), usesBackground: false };
    // Refuses a cycle that the selected steps cannot have.
    backgroundTimes(spec, selectedSteps(series));
    return { rows, halo: 0, usesBackground: false };
  },
  chunk(input, series, options) {
    const spec = specOf(options);
    return spec.kind === "running-mean"
      ? movingPart(input, series, spec)
      : backgroundPart(spec, input.slabs.field, series.steps, input.times);
  },
  finish(parts, series, options) {
    const spec = specOf(options);
    return spec.kind === "running-mean"
      ? movingMean(parts, series, spec)
      : fittedMean(parts, series, spec, options.cycle_points as number);
  },
};
