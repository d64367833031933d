import { DataError } from "../../errors.ts";
import { signed8, signed16, signed24, signed32, unsigned16, unsigned24, unsigned32 } from "./octets.ts";
import { constantValue, edition2Scaling, type Scaling } from "./scaling.ts";

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
interface Groups {
  readonly references: Float64Array;
  readonly widths: Float64Array;
  readonly lengths: Float64Array;
  /** First octet of the groups' values. */
  readonly at: number;
}

function groupsOf(section: Uint8Array, view: DataView, at: number, end: number, count: number): Groups {
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

/** Packed numbers of all groups, reference added; NaN where a number stands for "missing". */
function packedNumbers(
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

function unsignedOf(bytes: Uint8Array, at: number, octets: number): number {
  return octets === 1
    ? (bytes[at] as number)
    : octets === 2
      ? unsigned16(bytes, at)
      : octets === 3
        ? unsigned24(bytes, at)
        : unsigned32(bytes, at);
}

function signedOf(bytes: Uint8Array, at: number, octets: number): number {
  return octets === 1
    ? signed8(bytes, at)
    : octets === 2
      ? signed16(bytes, at)
      : octets === 3
        ? signed24(bytes, at)
        : signed32(bytes, at);
}

/** Undo first or second differences in place and scale; missing values take no part (FM 92, template 7.3). */
function summed(packed: Float64Array, firsts: readonly number[], least: number, scaling: Scaling): Float64Array {
  const { reference, binary, decimal } = scaling;
  const isSecond = firsts.length === 2;
  let before = 0;
  let last = 0;
  let seen = 0;
  let i = 0;
  for (; i < packed.length && seen < firsts.length; i++) {
    if (Number.isNaN(packed[i])) continue;
    before = last;
    last = firsts[seen++] as number;
    packed[i] = (last * binary + reference) * decimal;
  }
  if (isSecond) {
    for (; i < packed.length; i++) {
      const value = (packed[i] as number) + least + 2 * last - before;
      packed[i] = (value * binary + reference) * decimal;
      if (Number.isNaN(value)) continue;
      before = last;
      last = value;
    }
    return packed;
  }
  for (; i < packed.length; i++) {
    const value = (packed[i] as number) + least + last;
    packed[i] = (value * binary + reference) * decimal;
    if (!Number.isNaN(value)) last = value;
  }
  return packed;
}

/**
 * Values of complex packing, template 5.2, and of complex packing with spatial differences, template 5.3.
 *
 * @param section Section 5 of the message.
 * @param bytes   A buffer with four octets to spare after `end`.
 * @param at      First octet of section 7's data; `end` is the first after them.
 * @throws FormatError if the groups do not make up `count` values or do not fit.
 */
export function complexValues(
  section: Uint8Array,
  template: 2 | 3,
  bytes: Uint8Array,
  at: number,
  end: number,
  count: number,
): Float64Array {
  if (section.length < (template === 2 ? 47 : 49)) damaged(`its section 5 has ${section.length} bytes`);
  const scaling = edition2Scaling(section);
  // No groups at all: a constant field.
  if (unsigned32(section, 31) === 0) return new Float64Array(count).fill(constantValue(scaling));
  const missingKinds = section[22] as number;
  if (missingKinds > 2) damaged(`its missing values are of an unknown kind (${missingKinds})`);
  const view = new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength);
  let from = at;
  let firsts: number[] | null = null;
  let least = 0;
  if (template === 3) {
    const order = section[47] as number;
    const octets = section[48] as number;
    if (order !== 1 && order !== 2) damaged(`its spatial differences are of order ${order}`);
    if (octets > 4) damaged(`its first values have ${octets} octets`);
    if (at + (order + 1) * octets > end) damaged("its data end before the first values");
    // First values are packed numbers and so never negative; their least difference may be.
    firsts = Array.from({ length: order }, (_, k) => (octets === 0 ? 0 : unsignedOf(bytes, at + k * octets, octets)));
    least = octets === 0 ? 0 : signedOf(bytes, at + order * octets, octets);
    from = at + (order + 1) * octets;
  }
  const groups = groupsOf(section, view, from, end, count);
  const packed = packedNumbers(section, view, groups, end, count, missingKinds);
  if (firsts !== null) return summed(packed, firsts, least, scaling);
  const { reference, binary, decimal } = scaling;
  for (let i = 0; i < count; i++) packed[i] = ((packed[i] as number) * binary + reference) * decimal;
  return packed;
}
