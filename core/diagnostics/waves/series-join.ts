import type { ChunkPart } from "../entry.ts";

/** One array of all parts, end to end. */
export function joinedParts(parts: readonly ChunkPart[], name: string): Float64Array {
  const [only] = parts;
  if (parts.length === 1 && only !== undefined) return only[name] as Float64Array;
  const arrays = parts.map((part) => part[name] as Float64Array);
  const out = new Float64Array(arrays.reduce((sum, array) => sum + array.length, 0));
  let at = 0;
  for (const array of arrays) {
    out.set(array, at);
    at += array.length;
  }
  return out;
}
