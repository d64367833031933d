/** One stretch of bytes in the file, and where its values go in the slab. */
export interface Run {
  readonly offset: number;
  readonly values: number;
  readonly into: number;
}

/**
 * The contiguous stretches of a hyperslab.
 *
 * @param start, count Per dimension, slowest first, within `shape`.
 * @param strides      Bytes from one index to the next, per dimension.
 * @param bytes        Bytes of a value.
 */
export function runsOf(
  begin: number,
  shape: readonly number[],
  start: readonly number[],
  count: readonly number[],
  strides: readonly number[],
  bytes: number,
): Run[] {
  const total = count.reduce((product, n) => product * n, 1);
  if (total === 0) return [];
  // Dimensions at the fast end that are read whole, and follow on without a gap, make one run with the next slower one.
  let fast = shape.length;
  let values = 1;
  while (fast > 0 && strides[fast - 1] === values * bytes) {
    fast -= 1;
    values *= count[fast] as number;
    if (count[fast] !== shape[fast]) break;
  }
  const runs: Run[] = [];
  const index = new Array<number>(fast).fill(0);
  let offset = begin + start.reduce((sum, s, d) => sum + s * (strides[d] as number), 0);
  for (let into = 0; into < total; into += values) {
    runs.push({ offset, values, into });
    for (let d = fast - 1; d >= 0; d--) {
      index[d] = (index[d] as number) + 1;
      offset += strides[d] as number;
      if ((index[d] as number) < (count[d] as number)) break;
      offset -= (strides[d] as number) * (count[d] as number);
      index[d] = 0;
    }
  }
  return runs;
}

/** Runs that are fetched in one read: from the first's start to the last's end. */
export interface Batch {
  readonly offset: number;
  readonly length: number;
  readonly runs: readonly Run[];
}

/** A gap that costs less to read over than a read of its own. */
const CHEAP_GAP = 64 * 1024;
const MOST_BYTES = 16 * 1024 * 1024;

/** Neighbouring runs in as few reads as pays; a long run is cut into several. */
export function batchesOf(runs: readonly Run[], bytes: number): Batch[] {
  const batches: Batch[] = [];
  let held: Run[] = [];
  let from = 0;
  let to = 0;
  const flush = () => {
    if (held.length > 0) batches.push({ offset: from, length: to - from, runs: held });
    held = [];
  };
  const mostValues = Math.floor(MOST_BYTES / bytes);
  for (const run of runs) {
    for (let done = 0; done < run.values; done += mostValues) {
      const values = Math.min(mostValues, run.values - done);
      const piece = { offset: run.offset + done * bytes, values, into: run.into + done };
      const end = piece.offset + values * bytes;
      const joins = held.length > 0 && piece.offset >= to && piece.offset - to <= CHEAP_GAP && end - from <= MOST_BYTES;
      if (!joins) {
        flush();
        from = piece.offset;
      }
      held.push(piece);
      to = end;
    }
  }
  flush();
  return batches;
}
