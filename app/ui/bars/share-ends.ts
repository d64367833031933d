import type { ShareBar } from "../chart/types.ts";

/** Where bars laid end to end begin and end. */
export interface ShareEnds {
  /** From zero; one more than there are bars. A missing share has no length. */
  readonly ends: readonly number[];
  /** Least and most of the ends, of the sum and of zero. */
  readonly low: number;
  readonly high: number;
}

export function shareEnds(shares: readonly ShareBar[], total: number): ShareEnds {
  const ends = [0];
  for (const { value } of shares) ends.push((ends[ends.length - 1] as number) + (Number.isFinite(value) ? value : 0));
  const sum = Number.isFinite(total) ? total : 0;
  return { ends, low: Math.min(...ends, sum), high: Math.max(...ends, sum) };
}
