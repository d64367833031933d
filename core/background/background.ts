import { DataError } from "../errors.ts";
import type { Grid, IndexRange, StepAxis } from "../field/axes.ts";
import { dayOfYearPhase } from "../field/calendar.ts";
import { stepsOfPeriod } from "../field/period.ts";
import type { Slab } from "../field/slab.ts";
import { choleskyFactor, fittedCycle, harmonicBasis, packedSize, stepProducts } from "./annual-cycle.ts";
import type { FittedBackground } from "./fit.ts";
import { type NormalSums, normalSums } from "./normal-sums.ts";
import type { BackgroundSpec } from "./spec.ts";

/** True for backgrounds that are known only after a pass over the record. */
export function needsPass(spec: BackgroundSpec): boolean {
  return spec.kind === "record-mean" || spec.kind === "period-mean" || spec.kind === "annual-cycle";
}

/**
 * The steps that such a pass reads.
 *
 * @throws OptionError for an annual cycle of a record that is not a time or covers too little of the year; RecipeError if the
 * period holds no step.
 */
export function backgroundTimes(spec: BackgroundSpec, steps: StepAxis): IndexRange {
  if (spec.kind === "annual-cycle") requireYear(spec.harmonics, steps);
  if (spec.kind === "period-mean") return stepsOfPeriod(steps, [spec.from, spec.to]);
  return [0, steps.values.length];
}

/** What the steps alone decide is said before anything is read. */
function requireYear(harmonics: number, steps: StepAxis): void {
  if (steps.kind !== "time")
    throw new DataError(
      "OptionError",
      `An annual cycle needs times, and the record steps along "${steps.name}", which is none. Choose the record's mean, or a mean over part of it.`,
    );
  const nSteps = steps.values.length;
  const m = 2 * harmonics + 1;
  const all = phases(steps, [0, nSteps]);
  const distinct = new Set(Array.from(all, (phase) => phase.toFixed(6))).size;
  if (distinct < m)
    throw new DataError(
      "OptionError",
      `An annual cycle of ${harmonics} harmonics needs ${m} different days of the year; this record has ${distinct}. Choose fewer harmonics, or the record's mean.`,
    );
  const basis = harmonicBasis(all, harmonics);
  const products = new Float64Array(packedSize(m));
  const own = new Float64Array(packedSize(m));
  for (let t = 0; t < nSteps; t++) {
    stepProducts(basis, m, t, own);
    for (let p = 0; p < own.length; p++) products[p] += own[p];
  }
  if (choleskyFactor(products, m) === null)
    throw new DataError(
      "OptionError",
      `The record's steps cover too little of the year to tell its ${harmonics} harmonics apart. Choose fewer harmonics, or the record's mean.`,
    );
}

/** Phase of the year at some steps, in [0, 1). */
export function phases(steps: StepAxis, [from, to]: IndexRange): Float64Array {
  return steps.values.slice(from, to).map((days) => dayOfYearPhase(days, steps.calendar));
}

function basisOf(spec: BackgroundSpec, steps: StepAxis, times: IndexRange): Float64Array {
  return spec.kind === "annual-cycle"
    ? harmonicBasis(phases(steps, times), spec.harmonics)
    : new Float64Array(times[1] - times[0]).fill(1);
}

/** Mean, and cosine and sine of each harmonic. */
export function coefficientCount(spec: BackgroundSpec): number {
  return spec.kind === "annual-cycle" ? 2 * spec.harmonics + 1 : 1;
}

/**
 * One chunk's share of the sums that fit a background; chunks add up in the order of time.
 *
 * With basis functions b_i (1, and cos, sin of each harmonic) the sums are Σ b_i x per cell, and Σ b_i b_j over the steps where
 * the cell has a value: once for all cells that miss none, and per cell for those that miss some.
 *
 * @param slab The steps `times`, any levels and rows.
 */
export function backgroundPart(spec: BackgroundSpec, slab: Slab, steps: StepAxis, times: IndexRange): NormalSums {
  const [, nLevel, nLat, nLon] = slab.shape;
  return normalSums(slab.data, basisOf(spec, steps, times), coefficientCount(spec), nLevel * nLat * nLon);
}

/**
 * Join the chunks' sums and solve for the background.
 *
 * A cell has one where its own steps suffice: at least one for a mean, 2n + 1 distinct phases of the year for n harmonics.
 *
 * @param parts In the order of time.
 * @param rows  Rows that the parts' slabs cover.
 * @throws As backgroundTimes.
 */
export function fitBackground(
  parts: readonly Readonly<Record<string, ArrayLike<number>>>[],
  series: { readonly steps: StepAxis; readonly background: BackgroundSpec; readonly grid: Grid },
  rows: IndexRange,
): FittedBackground {
  const { steps, background: spec } = series;
  const m = coefficientCount(spec);
  const times = backgroundTimes(spec, steps);
  const nSteps = times[1] - times[0];
  const [first] = parts;
  if (first === undefined) throw new DataError("ShapeError", "A background needs at least one chunk of the record.");
  const moments = Float64Array.from(first.moments as ArrayLike<number>);
  const products = Float64Array.from(first.products as ArrayLike<number>);
  const missing = Float64Array.from(first.missing as ArrayLike<number>);
  let gaps = Float64Array.from(first.gaps as ArrayLike<number>);
  const add = (into: Float64Array, from: ArrayLike<number>): void => {
    for (let i = 0; i < into.length; i++) into[i] = (into[i] as number) + (from[i] as number);
  };
  for (const part of parts.slice(1)) {
    add(moments, part.moments as ArrayLike<number>);
    add(products, part.products as ArrayLike<number>);
    add(missing, part.missing as ArrayLike<number>);
    const more = part.gaps as ArrayLike<number>;
    if (more.length > 0 && gaps.length > 0) add(gaps, more);
    else if (more.length > 0) gaps = Float64Array.from(more);
  }
  const coefficients = fittedCycle(m, nSteps, moments, products, gaps, missing);
  return { spec, coefficients, nCoefficients: m, nLon: series.grid.lon.length, rows };
}

/**
 * A fitted background at some steps, on rows that it covers.
 *
 * @returns Shape (steps, levels, rows, columns).
 */
export function backgroundAt(
  fitted: FittedBackground,
  steps: StepAxis,
  times: IndexRange,
  rows: IndexRange,
): Float64Array<ArrayBuffer> {
  const { coefficients, nCoefficients: m, nLon, spec } = fitted;
  const whole = (fitted.rows[1] - fitted.rows[0]) * nLon;
  const nLevel = coefficients.length / m / whole;
  const plane = (rows[1] - rows[0]) * nLon;
  const skipped = (rows[0] - fitted.rows[0]) * nLon;
  const nTime = times[1] - times[0];
  const out = new Float64Array(nTime * nLevel * plane);
  const basis = basisOf(spec, steps, times);
  for (let t = 0; t < nTime; t++) {
    for (let level = 0; level < nLevel; level++) {
      const into = (t * nLevel + level) * plane;
      const mean = level * whole + skipped;
      out.set(coefficients.subarray(mean, mean + plane), into);
      // Cosine and sine of a harmonic together: half the traffic.
      for (let i = 1; i < m; i += 2) {
        const cos = basis[t * m + i];
        const sin = basis[t * m + i + 1];
        const from = (i * nLevel + level) * whole + skipped;
        const beside = from + nLevel * whole;
        for (let c = 0; c < plane; c++)
          out[into + c] = out[into + c] + cos * coefficients[from + c] + sin * coefficients[beside + c];
      }
    }
  }
  return out;
}
