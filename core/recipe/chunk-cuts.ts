import type { IndexRange } from "../field/axes.ts";

const CHUNK_VALUES = 1 << 20; // 8 MB of 64-bit numbers
const MOST_VALUES = 1 << 23; // 64 MB, where a long halo would be read over and over

/**
 * The record cut into chunks of about 8 MB as 64-bit numbers.
 *
 * The cuts follow from the grid and the recipe alone, never from how many workers there are, so that sums over the record
 * always add up in the same order, to the same last bit.
 *
 * @param valuesPerStep Levels · rows · columns.
 * @param halo Steps read beyond a chunk on either side; chunks grow to twice that, up to 64 MB.
 * @returns Half-open ranges in the order of time, gap-free over `times`.
 */
export function chunkCuts(times: IndexRange, valuesPerStep: number, halo: number): IndexRange[] {
  const small = Math.floor(CHUNK_VALUES / valuesPerStep);
  const steps = Math.max(1, small, Math.min(2 * halo, Math.floor(MOST_VALUES / valuesPerStep)));
  const cuts: IndexRange[] = [];
  for (let from = times[0]; from < times[1]; from += steps) cuts.push([from, Math.min(times[1], from + steps)]);
  return cuts;
}
