import type { ChunkPart } from "../entry.ts";

type Numbers = Float64Array | Float32Array;

function joined<T extends Numbers | Uint8Array>(arrays: readonly T[], made: (size: number) => T): T {
  if (arrays.length === 1) return arrays[0];
  const out = made(arrays.reduce((sum, array) => sum + array.length, 0));
  let at = 0;
  for (const array of arrays) {
    out.set(array, at);
    at += array.length;
  }
  return out;
}

/** One array of all parts, end to end. */
export function joinedParts(parts: readonly ChunkPart[], name: string): Float64Array {
  return joined(
    parts.map((part) => part[name] as Float64Array),
    (size) => new Float64Array(size),
  );
}

/** The same of numbers that may be of either precision. */
export function joinedNumbers(parts: readonly ChunkPart[], name: string): Numbers {
  return joined(
    parts.map((part) => part[name] as Numbers),
    (size) => (parts[0]?.[name] instanceof Float32Array ? new Float32Array(size) : new Float64Array(size)),
  );
}

/** The same of reason codes, which a part leaves out where all its numbers, those of `beside`, are plain; undefined if all parts do. */
export function joinedReasons(parts: readonly ChunkPart[], name: string, beside: string): Uint8Array | undefined {
  if (parts.every((part) => part[name] === undefined)) return undefined;
  const out = new Uint8Array(parts.reduce((sum, part) => sum + part[beside].length, 0));
  let at = 0;
  for (const part of parts) {
    if (part[name] !== undefined) out.set(part[name] as Uint8Array, at);
    at += part[beside].length;
  }
  return out;
}

/** An array of each part, in the order of time: a record that need not lie in one piece. */
export function pieces(parts: readonly ChunkPart[], name: string): Float64Array[] {
  return parts.map((part) => part[name] as Float64Array);
}
