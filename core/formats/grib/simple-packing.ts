import { DataError } from "../../errors.ts";
import { constantValue, type Scaling } from "./scaling.ts";

/** Octets that a reader of whole words may touch beyond the last that it uses: every message has "7777" there. */
export const SLACK = 4;

/**
 * Values of `width` bits each, one after the other (templates 5.0 of edition 2 and section 4 of edition 1).
 *
 * @param bytes A buffer with SLACK octets after `end`.
 * @param at    First octet of the packed numbers; `end` is the first after them.
 * @throws FormatError if there are fewer bits than the values need, or values are wider than 32 bits.
 */
export function simpleValues(
  bytes: Uint8Array,
  at: number,
  end: number,
  width: number,
  count: number,
  scaling: Scaling,
): Float64Array {
  if (width === 0) return new Float64Array(count).fill(constantValue(scaling));
  if (width > 32) throw new DataError("FormatError", `its values of ${width} bits are wider than any`);
  if (at * 8 + count * width > end * 8)
    throw new DataError("FormatError", `its ${count} values of ${width} bits do not fit into ${end - at} bytes`);
  const { reference, binary, decimal } = scaling;
  const out = new Float64Array(count);
  // One loop for each common width: this is where time goes.
  if (width === 8) {
    for (let i = 0; i < count; i++) out[i] = ((bytes[at + i] as number) * binary + reference) * decimal;
    return out;
  }
  const view = new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength);
  if (width === 16) {
    for (let i = 0, p = at; i < count; i++, p += 2) out[i] = (view.getUint16(p) * binary + reference) * decimal;
    return out;
  }
  if (width === 24) {
    for (let i = 0, p = at; i < count; i++, p += 3) out[i] = ((view.getUint32(p) >>> 8) * binary + reference) * decimal;
    return out;
  }
  if (width <= 25) {
    // A number begins in the first octet of a word, so that 32 − 7 bits of it are sure to be there.
    const shift = 32 - width;
    for (let i = 0, byte = at, bit = 0; i < count; i++) {
      out[i] = (((view.getInt32(byte) << bit) >>> shift) * binary + reference) * decimal;
      bit += width;
      byte += bit >>> 3;
      bit &= 7;
    }
    return out;
  }
  const high = width - 16;
  for (let i = 0, byte = at, bit = 0; i < count; i++) {
    const upper = (view.getInt32(byte) << bit) >>> (32 - high);
    bit += high;
    byte += bit >>> 3;
    bit &= 7;
    const lower = (view.getInt32(byte) << bit) >>> 16;
    bit += 16;
    byte += bit >>> 3;
    bit &= 7;
    out[i] = ((upper * 65_536 + lower) * binary + reference) * decimal;
  }
  return out;
}
