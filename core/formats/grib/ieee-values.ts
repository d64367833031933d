import { DataError } from "../../errors.ts";

/**
 * Values as IEEE numbers of 32 or 64 bits, template 5.4.
 *
 * @param precision Code table 5.7: 1 = 32 bits, 2 = 64 bits.
 * @throws FormatError for another precision, or too few bytes.
 */
export function ieeeValues(bytes: Uint8Array, at: number, end: number, precision: number, count: number): Float64Array {
  if (precision !== 1 && precision !== 2)
    throw new DataError("FormatError", `its IEEE numbers are of precision ${precision}; 32 and 64 bits are read`);
  const octets = 4 * precision;
  if (at + count * octets > end)
    throw new DataError("FormatError", `its ${count} values of ${octets} bytes do not fit into ${end - at}`);
  const view = new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength);
  const out = new Float64Array(count);
  if (precision === 1) for (let i = 0, p = at; i < count; i++, p += 4) out[i] = view.getFloat32(p);
  else for (let i = 0, p = at; i < count; i++, p += 8) out[i] = view.getFloat64(p);
  return out;
}
