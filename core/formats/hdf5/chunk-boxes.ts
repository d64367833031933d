/** A part of a dataset: first index and size along each dimension. */
export interface Box {
  readonly start: readonly number[];
  readonly count: readonly number[];
}

export function boxSize({ count }: Box): number {
  return count.reduce((product, n) => product * n, 1);
}

/** The box widened to whole chunks: a chunk is unpacked whole, so what lies beside what was asked for comes free. */
export function wholeChunks(box: Box, chunks: readonly number[], shape: readonly number[]): Box {
  const start = box.start.map((s, d) => Math.floor(s / (chunks[d] as number)) * (chunks[d] as number));
  const count = box.count.map((n, d) => {
    const chunk = chunks[d] as number;
    const end = Math.min(shape[d] as number, Math.ceil(((box.start[d] as number) + n) / chunk) * chunk);
    return end - (start[d] as number);
  });
  return { start, count };
}

export function isInside(box: Box, outer: Box): boolean {
  return box.start.every((s, d) => {
    const from = outer.start[d] as number;
    return s >= from && s + (box.count[d] as number) <= from + (outer.count[d] as number);
  });
}

/** Where each run of a smaller box, along the fastest dimension, stands in a larger one that holds it. */
function* runs(small: Box, large: Box): Generator<{ readonly inSmall: number; readonly inLarge: number }> {
  const rank = small.count.length;
  const strides = new Array<number>(rank).fill(1);
  for (let d = rank - 2; d >= 0; d--) strides[d] = (strides[d + 1] as number) * (large.count[d + 1] as number);
  const run = rank === 0 ? 1 : (small.count[rank - 1] as number);
  const size = boxSize(small);
  const index = new Array<number>(rank).fill(0);
  for (let inSmall = 0; inSmall < size; inSmall += run) {
    let inLarge = 0;
    for (let d = 0; d < rank; d++)
      inLarge +=
        ((small.start[d] as number) - (large.start[d] as number) + (index[d] as number)) * (strides[d] as number);
    yield { inSmall, inLarge };
    for (let d = rank - 2; d >= 0; d--) {
      index[d] = (index[d] as number) + 1;
      if ((index[d] as number) < (small.count[d] as number)) break;
      index[d] = 0;
    }
  }
}

function runLength({ count }: Box): number {
  return count.length === 0 ? 1 : (count[count.length - 1] as number);
}

/** The numbers of `box` out of those of `outer`, which holds it. */
export function cutOut(values: Float64Array, outer: Box, box: Box): Float64Array {
  const out = new Float64Array(boxSize(box));
  const run = runLength(box);
  for (const { inSmall, inLarge } of runs(box, outer)) out.set(values.subarray(inLarge, inLarge + run), inSmall);
  return out;
}

/** Put the numbers of `box` where they belong in those of `outer`, which holds it. */
export function paste(values: Float64Array, box: Box, into: Float64Array, outer: Box): void {
  const run = runLength(box);
  for (const { inSmall, inLarge } of runs(box, outer)) into.set(values.subarray(inSmall, inSmall + run), inLarge);
}
