import { DataError } from "../errors.ts";
import type { IndexRange, StepAxis } from "../field/axes.ts";
import type { Slab } from "../field/slab.ts";
import type { BackgroundSpec } from "./spec.ts";

/** Days; times in hours stored as float64 days round off far below it. */
const STEP_TOLERANCE = 1e-6;

/** Days from step to step. @throws OptionError if the record is no time or its steps are uneven. */
export function evenStep(steps: StepAxis, what: string): number {
  const { values } = steps;
  if (steps.kind !== "time" || values.length < 2)
    throw new DataError(
      "OptionError",
      `${what} needs times, and the record steps along "${steps.name}", which is none. Choose the record's mean.`,
    );
  const differences = values.slice(1).map((value, i) => value - (values[i] as number));
  // The usual step is the median: one gap must not make every other step look odd.
  const step = differences.slice().sort()[Math.floor(differences.length / 2)] as number;
  for (let i = 1; i < values.length; i++) {
    const here = (values[i] as number) - (values[i - 1] as number);
    if (Math.abs(here - step) > STEP_TOLERANCE)
      throw new DataError(
        "OptionError",
        `${what} needs even steps; from step ${i} to ${i + 1} there are ${here.toFixed(3)} days where the usual step is ${step.toFixed(3)}. Fill the gap, or choose another background.`,
      );
  }
  return step;
}

/** Steps on either side of the centre: the largest odd number of steps within `days`. @throws OptionError as evenStep. */
export function runningMeanHalo(spec: BackgroundSpec, steps: StepAxis): number {
  if (spec.kind !== "running-mean") return 0;
  const step = evenStep(steps, "A running mean");
  const half = Math.floor((spec.days / step - 1) / 2 + STEP_TOLERANCE);
  if (half < 1)
    throw new DataError(
      "OptionError",
      `A running mean over ${spec.days} days holds fewer than three steps of ${step} days. Choose a longer one.`,
    );
  if (2 * half + 1 > steps.values.length)
    throw new DataError(
      "OptionError",
      `A running mean over ${spec.days} days is longer than the record of ${steps.values.length} steps. Choose a shorter one.`,
    );
  return half;
}

/**
 * Centred running mean.
 *
 * Each window is summed anew from its steps, so that the numbers do not depend on where a chunk begins. A window that misses
 * a value, or reaches beyond the record, has no mean: nothing is invented at the ends.
 *
 * @param slab   The steps `loaded`.
 * @param times  The steps wanted, within `loaded`.
 * @param spec   The running mean; its window is the largest odd number of steps within `days`.
 * @returns Shape (times, cells), NaN where the window is not whole.
 */
export function runningMean(
  slab: Slab,
  steps: StepAxis,
  loaded: IndexRange,
  times: IndexRange,
  spec: BackgroundSpec,
): Float64Array<ArrayBuffer> {
  const [, nLevel, nLat, nLon] = slab.shape;
  const cells = nLevel * nLat * nLon;
  const nTime = times[1] - times[0];
  const out = new Float64Array(nTime * cells);
  const half = runningMeanHalo(spec, steps);
  const share = 1 / (2 * half + 1);
  for (let t = 0; t < nTime; t++) {
    const centre = times[0] + t;
    const own = out.subarray(t * cells, (t + 1) * cells);
    if (centre - half < loaded[0] || centre + half >= loaded[1]) {
      own.fill(Number.NaN);
      continue;
    }
    for (let s = centre - half; s <= centre + half; s++) {
      const from = (s - loaded[0]) * cells;
      for (let c = 0; c < cells; c++) own[c] = (own[c] as number) + (slab.data[from + c] as number);
    }
    for (let c = 0; c < cells; c++) own[c] = (own[c] as number) * share;
  }
  return out;
}
