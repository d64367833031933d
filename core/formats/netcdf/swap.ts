import type { StoredType } from "../variable-store.ts";

/**
 * Big-endian bytes as numbers, in the buffer they came in where that can be.
 *
 * Whole words are turned round at once: a DataView read per value is several times slower.
 *
 * @param bytes Its offset in its buffer is 0 and its length a whole number of values; the bytes are changed.
 */
export function numbersOf(bytes: Uint8Array<ArrayBuffer>, type: StoredType): ArrayLike<number> {
  const { buffer, length } = bytes;
  switch (type) {
    case "int8":
      return new Int8Array(buffer, 0, length);
    case "uint8":
    case "char":
      return bytes;
    case "int16":
      swap2(new Uint16Array(buffer, 0, length / 2));
      return new Int16Array(buffer, 0, length / 2);
    case "uint16": {
      const words = new Uint16Array(buffer, 0, length / 2);
      swap2(words);
      return words;
    }
    case "int32":
      swap4(new Uint32Array(buffer, 0, length / 4));
      return new Int32Array(buffer, 0, length / 4);
    case "uint32": {
      const words = new Uint32Array(buffer, 0, length / 4);
      swap4(words);
      return words;
    }
    case "float32":
      swap4(new Uint32Array(buffer, 0, length / 4));
      return new Float32Array(buffer, 0, length / 4);
    case "float64":
      swap8(new Uint32Array(buffer, 0, length / 4));
      return new Float64Array(buffer, 0, length / 8);
    default:
      return wholeNumbers8(bytes, type === "int64");
  }
}

/** Turn each 16-bit word round, in place. */
export function swap2(words: Uint16Array): void {
  for (let i = 0; i < words.length; i++) {
    const w = words[i] as number;
    words[i] = (w << 8) | (w >>> 8);
  }
}

/** Turn each 32-bit word round, in place. */
export function swap4(words: Uint32Array): void {
  for (let i = 0; i < words.length; i++) {
    const w = words[i] as number;
    words[i] = (((w << 8) | (w >>> 24)) & 0x00ff00ff) | (((w << 24) | (w >>> 8)) & 0xff00ff00);
  }
}

/** Turn each pair of 32-bit words round as one 64-bit word, in place. */
export function swap8(words: Uint32Array): void {
  swap4(words);
  for (let i = 0; i + 1 < words.length; i += 2) {
    const high = words[i] as number;
    words[i] = words[i + 1] as number;
    words[i + 1] = high;
  }
}

/** 64-bit whole numbers as float64: exact to 2⁵³, rounded beyond. */
function wholeNumbers8(bytes: Uint8Array<ArrayBuffer>, signed: boolean): Float64Array {
  const view = new DataView(bytes.buffer, 0, bytes.length);
  const out = new Float64Array(bytes.length / 8);
  for (let i = 0; i < out.length; i++) {
    out[i] = (signed ? view.getInt32(8 * i) : view.getUint32(8 * i)) * 2 ** 32 + view.getUint32(8 * i + 4);
  }
  return out;
}
