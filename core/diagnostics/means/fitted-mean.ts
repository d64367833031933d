import { harmonicBasis } from "../../background/annual-cycle.ts";
import { fitBackground, phases } from "../../background/background.ts";
import type { FittedBackground } from "../../background/fit.ts";
import type { BackgroundSpec } from "../../background/spec.ts";
import { RADIANS_PER_DEGREE } from "../../constants.ts";
import type { StepAxis } from "../../field/axes.ts";
import { reasonCode } from "../../field/reasons.ts";
import type { ChunkPart, Coordinate, Outcome, ResultVariable, Series } from "../entry.ts";
import { mapCoordinates, mapVariable } from "./mean-map.ts";

const MISSING = reasonCode("missing");
const SHORT = reasonCode("short");

/** The record cut down to the steps that the recipe selects, so that sums and phases see those alone. */
export function selectedSteps(series: Series): StepAxis {
  return { ...series.steps, values: series.steps.values.slice(series.times[0], series.times[1]) };
}

/**
 * Mean of a record, or its annual cycle.
 *
 * @param points Moments of the year at which the cycle is written.
 */
export function fittedMean(parts: readonly ChunkPart[], series: Series, spec: BackgroundSpec, points: number): Outcome {
  const steps = selectedSteps(series);
  const fitted = fitBackground(parts, { steps, background: spec, grid: series.grid }, [0, series.grid.lat.length]);
  const cells = fitted.coefficients.length / fitted.nCoefficients;
  const count = new Float64Array(cells).fill(steps.values.length);
  for (const part of parts) for (let c = 0; c < cells; c++) count[c] -= part.missing[c];
  const mean = fitted.coefficients.slice(0, cells);
  // A cell without any value is missing; one with too few is too short.
  const reasons = Uint8Array.from(mean, (value, c) => (!Number.isNaN(value) ? 0 : count[c] === 0 ? MISSING : SHORT));
  const isCycle = spec.kind === "annual-cycle";
  const variables = [
    mapVariable(
      series,
      { name: "mean", title: isCycle ? "Mean over the year" : "Mean", units: series.units },
      mean,
      reasons,
    ),
    mapVariable(series, { name: "count", title: "Values used", units: "1" }, count, null),
  ];
  const coordinates = mapCoordinates(series);
  if (!isCycle) return { coordinates, variables, notes: [] };
  const harmonics = spec.harmonics;
  variables.push(...harmonicVariables(series, fitted, harmonics, reasons));
  coordinates.unshift(harmonicCoordinate(harmonics));
  if (points > 0) {
    variables.push(cycleVariable(series, fitted, harmonics, points, reasons));
    coordinates.unshift(yearCoordinate(points));
  }
  return { coordinates, variables, notes: gapNote(steps, harmonics) };
}

function harmonicCoordinate(n: number): Coordinate {
  const values = Float64Array.from({ length: n }, (_, i) => i + 1);
  return { name: "harmonic", values, units: "1", attributes: { long_name: "harmonic of the year" } };
}

/** The middles of `points` equal parts of the year. */
function yearCoordinate(points: number): Coordinate {
  const values = Float64Array.from({ length: points }, (_, i) => (i + 0.5) / points);
  const attributes = { long_name: "part of the year gone by, from 1 January 00 UTC" };
  return { name: "part_of_year", values, units: "1", attributes };
}

function harmonicVariables(
  series: Series,
  { coefficients }: FittedBackground,
  n: number,
  reasons: Uint8Array,
): ResultVariable[] {
  const cells = reasons.length;
  const amplitude = new Float64Array(n * cells);
  const peak = new Float64Array(n * cells);
  for (let h = 1; h <= n; h++) {
    for (let c = 0; c < cells; c++) {
      const a = coefficients[(2 * h - 1) * cells + c];
      const b = coefficients[2 * h * cells + c];
      amplitude[(h - 1) * cells + c] = Math.sqrt(a * a + b * b);
      const phase = Math.atan2(b, a) / RADIANS_PER_DEGREE / 360 / h;
      peak[(h - 1) * cells + c] = phase < 0 ? phase + 1 / h : phase;
    }
  }
  const lead = ["harmonic", n] as const;
  const peakTitle = "Part of the year at which the harmonic is first largest";
  return [
    mapVariable(
      series,
      { name: "amplitude", title: "Amplitude of the harmonic", units: series.units, lead },
      amplitude,
      reasons,
    ),
    mapVariable(series, { name: "peak", title: peakTitle, units: "1", lead }, peak, reasons),
  ];
}

function cycleVariable(
  series: Series,
  { coefficients, nCoefficients: m }: FittedBackground,
  harmonics: number,
  points: number,
  reasons: Uint8Array,
): ResultVariable {
  const cells = reasons.length;
  const basis = harmonicBasis(yearCoordinate(points).values, harmonics);
  const data = new Float64Array(points * cells);
  for (let p = 0; p < points; p++)
    for (let i = 0; i < m; i++) {
      const b = basis[p * m + i];
      for (let c = 0; c < cells; c++) data[p * cells + c] += b * coefficients[i * cells + c];
    }
  const lead = ["part_of_year", points] as const;
  return mapVariable(series, { name: "cycle", title: "Annual cycle", units: series.units, lead }, data, reasons);
}

/** Where the record leaves out more than half the shortest harmonic, what the fit says there is no more than the harmonics' own shape. */
function gapNote(steps: StepAxis, harmonics: number): string[] {
  const held = phases(steps, [0, steps.values.length]).sort();
  let widest = 1 - held[held.length - 1] + held[0];
  for (let i = 1; i < held.length; i++) widest = Math.max(widest, held[i] - held[i - 1]);
  if (widest <= 1 / (2 * harmonics)) return [];
  return [
    `The record leaves out ${Math.round(100 * widest)} % of the year in one piece: the cycle, its mean and its harmonics hold for the rest of the year alone.`,
  ];
}
