import { DataError } from "../../errors.ts";

/** Bits set in a byte. */
const SET = Uint8Array.from({ length: 256 }, (_, byte) => {
  let set = 0;
  for (let rest = byte; rest > 0; rest >>= 1) set += rest & 1;
  return set;
});

/** Points that a bitmap says are present. @param bits Bytes whose first `points` bits are the bitmap. */
export function presentPoints(bits: Uint8Array, points: number): number {
  if (bits.length * 8 < points)
    throw new DataError("FormatError", `its bitmap of ${bits.length} bytes is too short for ${points} points`);
  const whole = points >> 3;
  let count = 0;
  for (let i = 0; i < whole; i++) count += SET[bits[i] as number] as number;
  const rest = points & 7;
  if (rest > 0) count += SET[(bits[whole] as number) & (0xff << (8 - rest)) & 0xff] as number;
  return count;
}

/** Values where the bitmap has a one, NaN where it has a zero; shape (points). */
export function spreadByBitmap(values: Float64Array, bits: Uint8Array, points: number): Float64Array {
  const out = new Float64Array(points);
  for (let i = 0, next = 0; i < points; i++)
    out[i] = ((bits[i >> 3] as number) >> (7 - (i & 7))) & 1 ? (values[next++] as number) : Number.NaN;
  return out;
}
