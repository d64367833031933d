import { DataError } from "../errors.ts";
import type { Grid, IndexRange, StepAxis } from "../field/axes.ts";
import { dayOfYearPhase } from "../field/calendar.ts";
import { stepsOfPeriod } from "../field/period.ts";
import type { Slab } from "../field/slab.ts";
import { fittedCycle, harmonicBasis, packedSize } from "./annual-cycle.ts";
import type { FittedBackground } from "./fit.ts";
import type { BackgroundSpec } from "./spec.ts";

/** A chunk's share of the sums, in buffers of their own. */
export type BackgroundPart = {
  /** Σ b_i x, shape (coefficients, cells). */
  readonly moments: Float64Array<ArrayBuffer>;
  /** Σ b_i b_j over all steps, packed. */
  readonly products: Float64Array<ArrayBuffer>;
  /** The same over the steps that a cell misses, shape (packed, cells); empty if none misses any. */
  readonly gaps: Float64Array<ArrayBuffer>;
  /** Steps that each cell misses. */
  readonly missing: Float64Array<ArrayBuffer>;
};

/** True for backgrounds that are known only after a pass over the record. */
export function needsPass(spec: BackgroundSpec): boolean {
  return spec.kind === "record-mean" || spec.kind === "period-mean" || spec.kind === "annual-cycle";
}

/** The steps that such a pass reads. @throws OptionError if the period holds none, or for an annual cycle of a record that is not a time. */
export function backgroundTimes(spec: BackgroundSpec, steps: StepAxis): IndexRange {
  if (spec.kind === "annual-cycle") requireTime(steps, "An annual cycle");
  if (spec.kind === "period-mean") return stepsOfPeriod(steps, [spec.from, spec.to]);
  return [0, steps.values.length];
}

function requireTime(steps: StepAxis, what: string): void {
  if (steps.kind !== "time")
    throw new DataError(
      "OptionError",
      `${what} needs times, and the record steps along "${steps.name}", which is none. Choose the record's mean, or a mean over part of it.`,
    );
}

/** Phase of the year at some steps, in [0, 1). */
function phases(steps: StepAxis, [from, to]: IndexRange): Float64Array {
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
export function backgroundPart(spec: BackgroundSpec, slab: Slab, steps: StepAxis, times: IndexRange): BackgroundPart {
  const m = coefficientCount(spec);
  const basis = basisOf(spec, steps, times);
  const [nTime, nLevel, nLat, nLon] = slab.shape;
  const cells = nLevel * nLat * nLon;
  const pairs = packedSize(m);
  const moments = new Float64Array(m * cells);
  const missing = new Float64Array(cells);
  let gaps: Float64Array<ArrayBuffer> = new Float64Array(0);
  const products = new Float64Array(pairs);
  for (let t = 0; t < nTime; t++) {
    for (let i = 0, p = 0; i < m; i++)
      for (let j = 0; j <= i; j++, p++)
        products[p] = (products[p] as number) + (basis[t * m + i] as number) * (basis[t * m + j] as number);
    for (let c = 0; c < cells; c++) {
      const x = slab.data[t * cells + c] as number;
      if (!Number.isNaN(x)) {
        for (let i = 0; i < m; i++)
          moments[i * cells + c] = (moments[i * cells + c] as number) + (basis[t * m + i] as number) * x;
        continue;
      }
      // What the shared sums count and this cell does not have.
      if (gaps.length === 0) gaps = new Float64Array(pairs * cells);
      missing[c] = (missing[c] as number) + 1;
      for (let i = 0, p = 0; i < m; i++)
        for (let j = 0; j <= i; j++, p++)
          gaps[p * cells + c] =
            (gaps[p * cells + c] as number) + (basis[t * m + i] as number) * (basis[t * m + j] as number);
    }
  }
  return { moments, products, gaps, missing };
}

/**
 * Join the chunks' sums and solve for the background.
 *
 * A cell has one where its own steps suffice: at least one for a mean, 2n + 1 distinct phases of the year for n harmonics.
 *
 * @param parts In the order of time.
 * @param rows  Rows that the parts' slabs cover.
 * @throws OptionError if the record as a whole is too short.
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
  if (spec.kind === "annual-cycle") {
    const distinct = new Set(Array.from(phases(steps, times), (phase) => phase.toFixed(6))).size;
    if (distinct < m)
      throw new DataError(
        "OptionError",
        `An annual cycle of ${spec.harmonics} harmonics needs ${m} different days of the year; this record has ${distinct}. Choose fewer harmonics, or the record's mean.`,
      );
  }
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
      for (let i = 0; i < m; i++) {
        const b = basis[t * m + i] as number;
        const from = (i * nLevel + level) * whole + skipped;
        for (let c = 0; c < plane; c++)
          out[into + c] = (out[into + c] as number) + b * (coefficients[from + c] as number);
      }
    }
  }
  return out;
}
