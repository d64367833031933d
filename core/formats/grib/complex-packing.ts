import { DataError } from "../../errors.ts";
import { signed8, signed16, signed24, signed32, unsigned16, unsigned24, unsigned32 } from "./octets.ts";
import { groupsOf, packedNumbers } from "./packed-groups.ts";
import { constantValue, edition2Scaling, type Scaling } from "./scaling.ts";

function damaged(why: string): never {
  throw new DataError("FormatError", why);
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
