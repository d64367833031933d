import { DataError } from "../../errors.ts";
import { unsigned32 } from "./octets.ts";

function damaged(why: string): never {
  throw new DataError("FormatError", why);
}

/** Whole numbers of `width` ≤ 32 bits, one after the other from an octet on; the buffer has four octets to spare. */
function wholeNumbers(view: DataView, at: number, width: number, count: number): Float64Array {
  const out = new Float64Array(count);
  if (width === 0) return out;
  // Over 25 bits may not lie in one word: the upper 16 are read apart.
  const upper = width > 25 ? 16 : 0;
  const shift = 32 - (width - upper);
  let byte = at;
  let bit = 0;
  for (let i = 0; i < count; i++) {
    let high = 0;
    if (upper > 0) {
      high = (view.getInt32(byte) << bit) >>> 16;
      byte += 2;
    }
    const low = (view.getInt32(byte) << bit) >>> shift;
    out[i] = upper > 0 ? high * 2 ** (width - 16) + low : low;
    bit += width - upper;
    byte += bit >>> 3;
    bit &= 7;
  }
  return out;
}

/** Groups of values with a reference, a width and a length of their own each: templates 5.2 and 5.3. */
export interface Groups {
  readonly references: Float64Array;
  readonly widths: Float64Array;
  readonly lengths: Float64Array;
  /** First octet of the groups' values. */
  readonly at: number;
}

/**
 * Read how the groups are made (FM 92, template 7.2).
 *
 * @param at First octet of their references; `end` is the first after the section.
 * @throws FormatError if they do not fit, or do not hold `count` values together.
 */
export function groupsOf(section: Uint8Array, view: DataView, at: number, end: number, count: number): Groups {
  const number = unsigned32(section, 31);
  const referenceBits = section[19] as number;
  const widthBits = section[36] as number;
  const lengthBits = section[46] as number;
  if (number > count) damaged(`it has ${number} groups for ${count} values`);
  if (referenceBits > 32 || widthBits > 32 || lengthBits > 32) damaged("its groups are described with over 32 bits");
  const sizes = [referenceBits, widthBits, lengthBits].map((bits) => Math.ceil((number * bits) / 8)) as [
    number,
    number,
    number,
  ];
  if (at + sizes[0] + sizes[1] + sizes[2] > end) damaged(`its ${number} groups do not fit into ${end - at} bytes`);
  const references = wholeNumbers(view, at, referenceBits, number);
  const widths = wholeNumbers(view, at + sizes[0], widthBits, number);
  const lengths = wholeNumbers(view, at + sizes[0] + sizes[1], lengthBits, number);
  const leastWidth = section[35] as number;
  const leastLength = unsigned32(section, 37);
  const increment = section[41] as number;
  let sum = 0;
  for (let g = 0; g < number; g++) {
    widths[g] = (widths[g] as number) + leastWidth;
    lengths[g] = g === number - 1 ? unsigned32(section, 42) : (lengths[g] as number) * increment + leastLength;
    sum += lengths[g] as number;
    if ((widths[g] as number) > 32) damaged(`group ${g + 1} has values of ${widths[g]} bits`);
  }
  if (sum !== count) damaged(`its groups hold ${sum} values, not ${count}`);
  return { references, widths, lengths, at: at + sizes[0] + sizes[1] + sizes[2] };
}

/**
 * Packed numbers of all groups, reference added; NaN where a number stands for "missing".
 *
 * @param missingKinds 0, 1 (primary) or 2 (primary and secondary): numbers with all bits set, or all but the last.
 * @throws FormatError if a group reaches beyond the section.
 */
export function packedNumbers(
  section: Uint8Array,
  view: DataView,
  groups: Groups,
  end: number,
  count: number,
  missingKinds: number,
): Float64Array {
  const { references, widths, lengths } = groups;
  const out = new Float64Array(count);
  // A group of no width says "missing" by its reference.
  const allSet = 2 ** (section[19] as number) - 1;
  let byte = groups.at;
  let bit = 0;
  let i = 0;
  for (let g = 0; g < widths.length; g++) {
    const reference = references[g] as number;
    const width = widths[g] as number;
    const stop = i + (lengths[g] as number);
    if (width === 0) {
      const isMissing = missingKinds > 0 && (reference === allSet || (missingKinds === 2 && reference === allSet - 1));
      const value = isMissing ? Number.NaN : reference;
      while (i < stop) out[i++] = value;
      continue;
    }
    if (byte * 8 + bit + (stop - i) * width > end * 8)
      damaged(`group ${g + 1} of ${widths.length} reaches beyond its data`);
    const first = i;
    if (width <= 25) {
      const shift = 32 - width;
      for (; i < stop; i++) {
        out[i] = reference + ((view.getInt32(byte) << bit) >>> shift);
        bit += width;
        byte += bit >>> 3;
        bit &= 7;
      }
    } else {
      const high = width - 16;
      for (; i < stop; i++) {
        const upper = (view.getInt32(byte) << bit) >>> (32 - high);
        bit += high;
        byte += bit >>> 3;
        bit &= 7;
        const lower = (view.getInt32(byte) << bit) >>> 16;
        bit += 16;
        byte += bit >>> 3;
        bit &= 7;
        out[i] = reference + upper * 65_536 + lower;
      }
    }
    if (missingKinds > 0) {
      const top = reference + 2 ** width - 1;
      for (let k = first; k < stop; k++)
        if (out[k] === top || (missingKinds === 2 && out[k] === top - 1)) out[k] = Number.NaN;
    }
  }
  return out;
}
