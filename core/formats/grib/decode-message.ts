import { DataError } from "../../errors.ts";
import type { ByteSource } from "../byte-source.ts";
import type { FormatLibraries } from "../libraries.ts";
import { aecSamples } from "./aec.ts";
import { presentPoints, spreadByBitmap } from "./bitmap.ts";
import { complexValues } from "./complex-packing.ts";
import type { Extent, GribEntry } from "./grib-index.ts";
import { ieeeValues } from "./ieee-values.ts";
import { imageValues } from "./image-packing.ts";
import { ibmFloat, signed16, unsigned16, unsigned32 } from "./octets.ts";
import { edition1PackingRefusal, edition2PackingRefusal } from "./packing-refusal.ts";
import { constantValue, edition2Scaling, powerOfTen, scaledNumbers } from "./scaling.ts";
import { SLACK, simpleValues } from "./simple-packing.ts";

const EDITION_1_HEAD = 11; // octets of section 4 before its numbers
const EDITION_2_HEAD = 5; // length and number of a section
/** What the packings here need of section 5. */
const SECTION_5 = 64;

function damaged(why: string): never {
  throw new DataError("FormatError", why);
}

/** Numbers of edition 1's section 4, without those that the bitmap leaves out. */
function edition1Values(section: Uint8Array, end: number, count: number, decimalScale: number): Float64Array {
  const refusal = edition1PackingRefusal(section[3] as number);
  if (refusal !== null) damaged(refusal);
  const scaling = {
    reference: ibmFloat(section, 6),
    binary: 2 ** signed16(section, 4),
    decimal: powerOfTen(-decimalScale),
  };
  return simpleValues(section, EDITION_1_HEAD, end, section[10] as number, count, scaling);
}

async function edition2Values(
  packing: Uint8Array,
  data: Uint8Array,
  end: number,
  count: number,
  libraries: FormatLibraries,
): Promise<Float64Array> {
  const template = unsigned16(packing, 9);
  const refusal = edition2PackingRefusal(template);
  if (refusal !== null) damaged(refusal);
  const least = template === 4 ? 12 : template === 42 ? 25 : 20;
  if (packing.length < least) damaged(`its section 5 has ${packing.length} bytes`);
  const at = EDITION_2_HEAD;
  if (template === 4) return ieeeValues(data, at, end, packing[11] as number, count);
  if (template === 2 || template === 3) return complexValues(packing, template, data, at, end, count);
  const bits = packing[19] as number;
  const scaling = edition2Scaling(packing);
  // 40000 and 40010 are the numbers of 5.40 and 5.41 before they were standard.
  const isPng = template === 41 || template === 40_010;
  if (bits === 0) return new Float64Array(count).fill(constantValue(scaling));
  if (template === 0) return simpleValues(data, at, end, bits, count, scaling);
  if (template === 42) {
    const form = {
      bits,
      flags: packing[21] as number,
      blockSize: packing[22] as number,
      blocksPerReference: unsigned16(packing, 23),
    };
    return scaledNumbers(aecSamples(data.subarray(at, end), form, count), count, scaling);
  }
  return imageValues(isPng ? "png" : "jpeg2000", data.subarray(at, end), libraries, count, scaling);
}

/** Bytes of an extent with SLACK more: "7777" at least follows every one. */
function read(source: ByteSource, { at, length }: Extent): Promise<Uint8Array> {
  return source.read(at, length + SLACK);
}

/** Bits of a message's bitmap; null where it has none. */
async function bitmapBits(source: ByteSource, { bitmap }: GribEntry): Promise<Uint8Array | null> {
  if (bitmap === null) return null;
  return (await source.read(bitmap.at, bitmap.length)).subarray(6);
}

/**
 * Read one message's numbers, in the order of the file.
 *
 * @param points Points of its grid.
 * @returns Shape (points), in the units of the file; NaN where missing.
 * @throws FormatError, its message beginning with where the message is.
 */
export async function decodedMessage(
  source: ByteSource,
  entry: GribEntry,
  points: number,
  libraries: FormatLibraries,
): Promise<Float64Array> {
  try {
    const bits = await bitmapBits(source, entry);
    const data = await read(source, entry.data);
    const end = entry.data.length;
    const count = bits === null ? points : presentPoints(bits, points);
    let values: Float64Array;
    if (entry.edition === 1) values = edition1Values(data, end, count, entry.decimalScale);
    else {
      const packing = await source.read(entry.packing.at, Math.min(entry.packing.length, SECTION_5));
      const stated = packing.length < 11 ? -1 : unsigned32(packing, 5);
      // Section 5 counts what is packed: what the bitmap leaves out is not.
      if (stated !== count) damaged(`it holds ${stated} values, and its grid has ${count} points that are not missing`);
      values = await edition2Values(packing, data, end, count, libraries);
    }
    return bits === null ? values : spreadByBitmap(values, bits, points);
  } catch (error) {
    if (!(error instanceof DataError) || error.name === "Cancelled") throw error;
    throw new DataError(
      "FormatError",
      `${source.name}: the message at byte ${entry.at} cannot be read: ${error.message}.`,
      error,
    );
  }
}
