import type { AttributeValue } from "../variable-store.ts";
import { HeaderBytes } from "./header-bytes.ts";
import { numbersOf } from "./swap.ts";
import { CLASSIC_TYPES, type ClassicHeader, type ClassicVariable } from "./types.ts";

const TAG_DIMENSION = 10;
const TAG_VARIABLE = 11;
const TAG_ATTRIBUTE = 12;
/** NC_MAX_DIMS and the like are not part of the format; no sane variable has more dimensions than this. */
const MOST_DIMS_OF_A_VARIABLE = 1024;

/** True if a file that begins with these bytes is netCDF classic, 64-bit offset or CDF-5. */
export function looksLikeNetcdfClassic(first: Uint8Array): boolean {
  return (
    first[0] === 0x43 && first[1] === 0x44 && first[2] === 0x46 && (first[3] === 1 || first[3] === 2 || first[3] === 5)
  );
}

/** Names and text: UTF-8, with the trailing zeros that C programs leave cut off. */
function textOf(bytes: Uint8Array): string {
  let end = bytes.length;
  while (end > 0 && bytes[end - 1] === 0) end -= 1;
  return new TextDecoder("utf-8").decode(bytes.slice(0, end));
}

/**
 * The header of a netCDF classic file.
 *
 * Source: NetCDF Classic Format Specification (Unidata, NetCDF Users Guide, file format specifications): CDF-1, CDF-2; CDF-5
 * as PnetCDF defines it: counts become 64 bits wide.
 *
 * @param prefix   Bytes from the file's start.
 * @param fileSize Bytes of the whole file.
 * @throws PrefixEnds if `prefix` is too short; FormatError where an item is impossible.
 */
export function classicHeader(prefix: Uint8Array, fileName: string, fileSize: number): ClassicHeader {
  const from = new HeaderBytes(prefix, fileName, fileSize);
  const magic = from.padded(4);
  if (!looksLikeNetcdfClassic(magic)) throw from.wrong("it does not begin with CDF and a known version", 0);
  const version = magic[3] as 1 | 2 | 5;
  const wide = version === 5;
  const count = (what: string): number => (wide ? from.uint64(what) : from.uint32());
  const countBytes = wide ? 8 : 4;

  const name = (): string => textOf(from.padded(from.fitting(count("a name's length"), 1, "letters of a name")));

  /** Length of a list that starts with `tag`; an absent list is two zeros. */
  const list = (tag: number, itemBytes: number, what: string): number => {
    const at = from.offset;
    const found = from.uint32();
    const length = count(`the number of ${what}`);
    if (found === 0 && length === 0) return 0;
    if (found !== tag) throw from.wrong(`a list of ${what} should start here`, at);
    return from.fitting(length, itemBytes, what);
  };

  const typeHere = () => {
    const at = from.offset;
    const code = from.uint32();
    const type = CLASSIC_TYPES.get(code);
    if (type === undefined || (code > 6 && !wide)) throw from.wrong(`type ${code} is not known`, at);
    return type;
  };

  const attributes = (): Record<string, AttributeValue> => {
    // A prototype-free record: a file may well hold an attribute named "constructor".
    const found: Record<string, AttributeValue> = Object.create(null);
    const length = list(TAG_ATTRIBUTE, 2 * countBytes + 4, "attributes");
    for (let i = 0; i < length; i++) {
      const key = name();
      const { type, bytes } = typeHere();
      const values = from.fitting(count("an attribute's length"), bytes, "values of an attribute");
      const data = from.padded(values * bytes);
      if (type === "char") found[key] = textOf(data);
      else {
        const numbers = Array.from(numbersOf(new Uint8Array(data), type));
        found[key] = numbers.length === 1 ? (numbers[0] as number) : numbers;
      }
    }
    return found;
  };

  const records = from.recordCount(wide);
  const dimensions: { name: string; length: number }[] = [];
  const nDimensions = list(TAG_DIMENSION, 2 * countBytes, "dimensions");
  for (let i = 0; i < nDimensions; i++) dimensions.push({ name: name(), length: count("a dimension's length") });
  const recordDimension = dimensions.findIndex(({ length }) => length === 0);
  const globals = attributes();

  const variables: ClassicVariable[] = [];
  const nVariables = list(TAG_VARIABLE, 5 * countBytes + 8, "variables");
  for (let i = 0; i < nVariables; i++) {
    const variableName = name();
    const at = from.offset;
    const nDims = from.fitting(count("a variable's number of dimensions"), countBytes, "dimensions of a variable");
    if (nDims > MOST_DIMS_OF_A_VARIABLE) throw from.wrong(`variable ${variableName} has ${nDims} dimensions`, at);
    const dimIds = Array.from({ length: nDims }, () => count("a dimension's number"));
    const bad = dimIds.find((id, place) => id >= dimensions.length || (place > 0 && id === recordDimension));
    if (bad !== undefined)
      throw from.wrong(`variable ${variableName} names dimension ${bad}, which it cannot have`, at);
    const own = attributes();
    const { type, bytes } = typeHere();
    count("a variable's size"); // vsize: redundant, and wrong by design for large variables
    const begin = version === 1 ? from.uint32() : from.uint64("a variable's place");
    const isRecord = nDims > 0 && dimIds[0] === recordDimension;
    const values = dimIds.slice(isRecord ? 1 : 0).reduce((product, id) => product * (dimensions[id]?.length ?? 0), 1);
    // Turned round so that NaN, which is 0 · ∞, is caught as well.
    if (!(values * bytes <= Number.MAX_SAFE_INTEGER))
      throw from.wrong(`variable ${variableName} is impossibly large`, at);
    variables.push({
      name: variableName,
      type,
      bytesPerValue: bytes,
      dimIds,
      attributes: own,
      begin,
      isRecord,
      dataBytes: values * bytes,
    });
  }

  const inRecord = variables.filter(({ isRecord }) => isRecord);
  // A single record variable of short values is not padded (specification, "Note on padding").
  const recordStride =
    inRecord.length === 1
      ? (inRecord[0] as ClassicVariable).dataBytes
      : inRecord.reduce((sum, { dataBytes }) => sum + Math.ceil(dataBytes / 4) * 4, 0);
  return { version, dimensions, attributes: globals, variables, records, recordStride, headerBytes: from.offset };
}
