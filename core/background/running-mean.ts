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
 * Sums over aligned blocks of 1, 2, 4 … steps: entry l holds the blocks [j · 2^l, (j + 1) · 2^l) of the record that lie in
 * what is loaded, from j = `first` on. Entry 0 is the slab itself.
 */
interface BlockSums {
  readonly first: number;
  readonly sums: Float64Array;
}

function blockSums(x: Float64Array, loaded: IndexRange, cells: number, longest: number): BlockSums[] {
  const blocks: BlockSums[] = [{ first: loaded[0], sums: x }];
  for (let size = 2; size <= longest; size *= 2) {
    const below = blocks[blocks.length - 1];
    const first = Math.ceil(loaded[0] / size);
    const count = Math.max(0, Math.floor(loaded[1] / size) - first);
    const sums = new Float64Array(count * cells);
    for (let j = 0; j < count; j++) {
      const a = (2 * (first + j) - below.first) * cells;
      const b = a + cells;
      for (let c = 0, into = j * cells; c < cells; c++, into++) sums[into] = below.sums[a + c] + below.sums[b + c];
    }
    blocks.push({ first, sums });
  }
  return blocks;
}

/**
 * Centred running mean.
 *
 * A window is the sum of the fewest aligned blocks that make it up: 2 log₂ of its steps at most, and blocks follow from the
 * record's own counting, so that the numbers do not depend on where a chunk begins. A window that misses a value, or reaches
 * beyond the record, has no mean: nothing is invented at the ends.
 *
 * @param slab   The steps `loaded`. Not modified.
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
  const blocks = blockSums(slab.data, loaded, cells, 2 * half + 1);
  for (let t = 0; t < nTime; t++) {
    const centre = times[0] + t;
    const into = t * cells;
    if (centre - half < loaded[0] || centre + half >= loaded[1]) {
      out.fill(Number.NaN, into, into + cells);
      continue;
    }
    const end = centre + half + 1;
    for (let s = centre - half; s < end; ) {
      let level = 0;
      while (s % 2 ** (level + 1) === 0 && s + 2 ** (level + 1) <= end) level += 1;
      const { first, sums } = blocks[level];
      const from = (s / 2 ** level - first) * cells;
      for (let c = 0; c < cells; c++) out[into + c] += sums[from + c];
      s += 2 ** level;
    }
    for (let c = into; c < into + cells; c++) out[c] *= share;
  }
  return out;
}
