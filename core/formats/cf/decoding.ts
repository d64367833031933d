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
/** Values that the netCDF library writes where nothing was written (netcdf.h, NC_FILL_*); bytes have none. */
const DEFAULT_FILL: Readonly<Record<string, number>> = {
  int16: -32_767,
  int32: -2_147_483_647,
  float32: 9.969209968386869e36,
  float64: 9.969209968386869e36,
  uint16: 65_535,
  uint32: 4_294_967_295,
};

/** Read from a variable's attributes as the CF conventions (2.5.1, 8.1) and the NetCDF Users Guide (appendix A) say. */
export function decodingOf(variable: StoredVariable): Decoding {
  const { attributes, type } = variable;
  const own = numbersOf(attributes, "_FillValue");
  const fallback = DEFAULT_FILL[type];
  const fill = own.length > 0 || fallback === undefined ? own : [fallback];
  const unsigned = textOf(attributes, "_Unsigned")?.toLowerCase() === "true" && type in BITS;
  const wrap = unsigned ? 2 ** BITS[type as keyof typeof BITS] : 0;
  const range = numbersOf(attributes, "valid_range");
  // Attributes may be written wider than the data (1e20 as a double beside floats, 255 beside unsigned bytes) or as signed as they are.
  const stored = (value: number): number =>
    type === "float32" ? Math.fround(value) : wrap !== 0 && value >= wrap / 2 ? value - wrap : value;
  const read = (value: number): number => (wrap !== 0 && value < 0 && Number.isFinite(value) ? value + wrap : value);
  return {
    // A fill value of NaN on whole numbers never matches, and on real ones NaN is missing anyway.
    missing: [...new Set([...fill, ...numbersOf(attributes, "missing_value")].map(stored))].filter(
      (value) => !Number.isNaN(value),
    ),
    least: read(range[0] ?? numbersOf(attributes, "valid_min")[0] ?? Number.NEGATIVE_INFINITY),
    most: read(range[1] ?? numbersOf(attributes, "valid_max")[0] ?? Number.POSITIVE_INFINITY),
    wrap,
    scale: numbersOf(attributes, "scale_factor")[0] ?? 1,
    offset: numbersOf(attributes, "add_offset")[0] ?? 0,
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
