import type { StoredVariable, VariableStore } from "../variable-store.ts";
import { numbersOf, textOf } from "./attributes.ts";

/** How stored numbers become values: missing ones are known as they stand in the file, then value = stored · scale + offset. */
export interface Decoding {
  readonly missing: readonly number[];
  readonly least: number;
  readonly most: number;
  /** Added to negative stored numbers (`_Unsigned`); 0 = none. */
  readonly wrap: number;
  readonly scale: number;
  readonly offset: number;
}

const BITS = { int8: 8, int16: 16, int32: 32 } as const;
/** What whole numbers of a type can be; 64-bit ones hold any limit that comes up. */
const SPANS: Readonly<Record<string, readonly [least: number, most: number]>> = {
  int8: [-(2 ** 7), 2 ** 7 - 1],
  uint8: [0, 2 ** 8 - 1],
  int16: [-(2 ** 15), 2 ** 15 - 1],
  uint16: [0, 2 ** 16 - 1],
  int32: [-(2 ** 31), 2 ** 31 - 1],
  uint32: [0, 2 ** 32 - 1],
};
const LIMIT_SLACK = 1e-6; // of a whole number: a limit divided by a scale factor is rounded by far less
/** Values that the netCDF library writes where nothing was written (netcdf.h, NC_FILL_*); bytes have none. */
const DEFAULT_FILL: Readonly<Record<string, number>> = {
  int16: -32_767,
  int32: -2_147_483_647,
  float32: 9.969209968386869e36,
  float64: 9.969209968386869e36,
  uint16: 65_535,
  uint32: 4_294_967_295,
  // As float64, which is how they are read.
  int64: -(2 ** 63),
  uint64: 2 ** 64,
};

/**
 * Least and most of the numbers as they stand in the file.
 *
 * Limits that whole numbers of the stored type cannot be are of the unpacked values (NetCDF Users Guide, appendix A: limits of
 * the wider type of scale_factor are in the units of the unpacked data).
 */
function storedLimits(
  { attributes, type }: StoredVariable,
  wrap: number,
  scale: number,
  offset: number,
): { least: number; most: number } {
  const range = numbersOf(attributes, "valid_range");
  // A limit of NaN limits nothing, as nothing is less or more than it.
  const limit = (value: number | undefined, none: number): number =>
    value === undefined || Number.isNaN(value) ? none : value;
  const least = limit(range[0] ?? numbersOf(attributes, "valid_min")[0], Number.NEGATIVE_INFINITY);
  const most = limit(range[1] ?? numbersOf(attributes, "valid_max")[0], Number.POSITIVE_INFINITY);
  if (type === "float32") return { least: Math.fround(least), most: Math.fround(most) };
  const [lowest, highest] = SPANS[type] ?? [Number.NEGATIVE_INFINITY, Number.POSITIVE_INFINITY];
  const isStored = (value: number): boolean =>
    !Number.isFinite(value) ||
    (Number.isInteger(value) && value >= lowest && value <= (wrap === 0 ? highest : wrap - 1));
  if (type in SPANS && !(isStored(least) && isStored(most))) {
    const [a, b] = [(least - offset) / scale, (most - offset) / scale];
    return { least: Math.ceil(Math.min(a, b) - LIMIT_SLACK), most: Math.floor(Math.max(a, b) + LIMIT_SLACK) };
  }
  const read = (value: number): number => (wrap !== 0 && value < 0 && Number.isFinite(value) ? value + wrap : value);
  return { least: read(least), most: read(most) };
}

/** Read from a variable's attributes as the CF conventions (2.5.1, 8.1) and the NetCDF Users Guide (appendix A) say. */
export function decodingOf(variable: StoredVariable): Decoding {
  const { attributes, type } = variable;
  const own = numbersOf(attributes, "_FillValue");
  const fallback = DEFAULT_FILL[type];
  const fill = own.length > 0 || fallback === undefined ? own : [fallback];
  const unsigned = textOf(attributes, "_Unsigned")?.toLowerCase() === "true" && type in BITS;
  const wrap = unsigned ? 2 ** BITS[type as keyof typeof BITS] : 0;
  const scale = numbersOf(attributes, "scale_factor")[0] ?? 1;
  const offset = numbersOf(attributes, "add_offset")[0] ?? 0;
  // Attributes may be written wider than the data (1e20 as a double beside floats, 255 beside unsigned bytes) or as signed as they are.
  const stored = (value: number): number =>
    type === "float32" ? Math.fround(value) : wrap !== 0 && value >= wrap / 2 ? value - wrap : value;
  return {
    // A fill value of NaN on whole numbers never matches, and on real ones NaN is missing anyway.
    missing: [...new Set([...fill, ...numbersOf(attributes, "missing_value")].map(stored))].filter(
      (value) => !Number.isNaN(value),
    ),
    ...storedLimits(variable, wrap, scale, offset),
    wrap,
    scale,
    offset,
  };
}

/** Decode in place; missing → NaN. @returns `stored`. */
export function decodeInPlace(stored: Float64Array, how: Decoding): Float64Array {
  const { missing, least, most, wrap, scale, offset } = how;
  const [a = Number.NaN, b = Number.NaN] = missing;
  const isPlain =
    missing.length < 3 && wrap === 0 && least === Number.NEGATIVE_INFINITY && most === Number.POSITIVE_INFINITY;
  // The common cases run over whole records, so they get loops without a test that cannot matter.
  if (isPlain && scale === 1 && offset === 0) {
    if (missing.length === 0) return stored;
    for (let i = 0; i < stored.length; i++) {
      const x = stored[i];
      if (x === a || x === b) stored[i] = Number.NaN;
    }
    return stored;
  }
  if (isPlain) {
    for (let i = 0; i < stored.length; i++) {
      const x = stored[i];
      stored[i] = x === a || x === b ? Number.NaN : x * scale + offset;
    }
    return stored;
  }
  const more = new Set(missing);
  for (let i = 0; i < stored.length; i++) {
    let x = stored[i] as number;
    if (more.has(x)) {
      stored[i] = Number.NaN;
      continue;
    }
    if (wrap !== 0 && x < 0) x += wrap;
    stored[i] = x >= least && x <= most ? x * scale + offset : Number.NaN;
  }
  return stored;
}

/** A hyperslab of a variable, decoded, in one pass (into `into`, if that has just the size) where the store can. @throws As the store does. */
export function decodedNumbers(
  store: VariableStore,
  variable: string,
  start: readonly number[],
  count: readonly number[],
  how: Decoding,
  into?: Float64Array,
): Promise<Float64Array> {
  if (store.readDecoded !== undefined) return store.readDecoded(variable, start, count, how, into);
  return store.readNumbers(variable, start, count).then((stored) => decodeInPlace(stored, how));
}
