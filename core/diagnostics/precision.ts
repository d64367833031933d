/** Over this many numbers a result is kept as float32: its seven digits are more than any file's packing holds. */
const MOST_DOUBLE = 1_000_000;

/** True for a result so long that it is kept as float32. */
export function isSingle(size: number): boolean {
  return size > MOST_DOUBLE;
}

/** An array for a result of `size` numbers. */
export function resultArray(size: number): Float64Array<ArrayBuffer> | Float32Array<ArrayBuffer> {
  return isSingle(size) ? new Float32Array(size) : new Float64Array(size);
}

/** An array for `size` numbers of a result that has `whole` of them. */
export function partArray(size: number, whole: number): Float64Array<ArrayBuffer> | Float32Array<ArrayBuffer> {
  return isSingle(whole) ? new Float32Array(size) : new Float64Array(size);
}

/** What a result that is float32 says of it. */
export const SINGLE_NOTE =
  "Numbers of every row and step are kept to seven digits (float32), for there are over a million.";
