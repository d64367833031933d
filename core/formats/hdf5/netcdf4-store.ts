import { DataError } from "../../errors.ts";
import type { ByteSource } from "../byte-source.ts";
import { type Decoding, decodeInPlace } from "../cf/decoding.ts";
import type { Hdf5Dataset, Hdf5Library, Hdf5Numbers } from "../libraries.ts";
import type { AttributeValue, StoredDimension, StoredVariable, VariableStore } from "../variable-store.ts";
import { type Box, boxSize, cutOut, isInside, paste, wholeChunks } from "./chunk-boxes.ts";
import { dimensionNames, isBareDimension, variableName } from "./dimension-names.ts";

/** Attributes that netCDF-4 and HDF5 keep for themselves. */
const BOOKKEEPING = new Set([
  "CLASS",
  "NAME",
  "DIMENSION_LIST",
  "REFERENCE_LIST",
  "DIMENSION_LABELS",
  "_Netcdf4Coordinates",
  "_Netcdf4Dimid",
  "_NCProperties",
  "_nc3_strict",
]);
/** Filters that the library unpacks: deflate, shuffle, checksum, szip, n-bit, scale-offset (HDF5 documentation, H5Z). */
const KNOWN_FILTERS = new Set([1, 2, 3, 4, 5, 6]);
/** Unpacked chunks kept, in numbers: 32 MB. */
const MOST_KEPT = 1 << 22;

/** True if a file that begins with these bytes is HDF5. */
export function looksLikeHdf5(first: Uint8Array): boolean {
  return [0x89, 0x48, 0x44, 0x46, 0x0d, 0x0a, 0x1a, 0x0a].every((byte, i) => first[i] === byte);
}

function shownAttributes(attributes: Readonly<Record<string, AttributeValue>>): Record<string, AttributeValue> {
  const shown: Record<string, AttributeValue> = Object.create(null);
  for (const [name, value] of Object.entries(attributes)) if (!BOOKKEEPING.has(name)) shown[name] = value;
  return shown;
}

function doubles(numbers: Hdf5Numbers): Float64Array {
  if (numbers instanceof BigInt64Array || numbers instanceof BigUint64Array) return Float64Array.from(numbers, Number);
  return new Float64Array(numbers);
}

/** Stored numbers as values in one pass: missing ones NaN, packing undone. The plain kinds alone; null for the rest. */
function decoded(numbers: Hdf5Numbers, how: Decoding, into: Float64Array | undefined): Float64Array | null {
  const { missing, least, most, wrap, scale, offset } = how;
  const isPlain =
    (numbers instanceof Float32Array || numbers instanceof Int16Array) &&
    missing.length <= 2 &&
    wrap === 0 &&
    least === Number.NEGATIVE_INFINITY &&
    most === Number.POSITIVE_INFINITY;
  if (!isPlain) return null;
  const [a = Number.NaN, b = Number.NaN] = missing;
  const out = into?.length === numbers.length ? into : new Float64Array(numbers.length);
  if (scale === 1 && offset === 0)
    for (let i = 0; i < out.length; i++) {
      const x = numbers[i] as number;
      out[i] = x === a || x === b ? Number.NaN : x;
    }
  else
    for (let i = 0; i < out.length; i++) {
      const x = numbers[i] as number;
      out[i] = x === a || x === b ? Number.NaN : x * scale + offset;
    }
  return out;
}

interface Kept {
  readonly box: Box;
  readonly values: Float64Array;
}

/**
 * Open a netCDF-4 file, or plain HDF5 that keeps to its ways: metadata are read, no numbers.
 *
 * Source: NetCDF-4 file format specification (Unidata, NetCDF Users Guide) for dimension scales and bookkeeping.
 *
 * @throws FormatError in words for a damaged file.
 */
export async function openNetcdf4(source: ByteSource, library: Hdf5Library): Promise<VariableStore> {
  const file = library.open(source);
  const notes = [...file.notes];
  const lengths = new Map<string, StoredDimension>();
  const sets = new Map<string, Hdf5Dataset>();
  const variables: StoredVariable[] = [];
  for (const set of file.datasets) {
    const dims = dimensionNames(set, file);
    dims.forEach((name, d) => {
      const isRecord = set.unlimited[d] === true || lengths.get(name)?.isRecord === true;
      const length = Math.max(set.shape[d] as number, lengths.get(name)?.length ?? 0);
      lengths.set(name, { name, length, isRecord });
    });
    if (isBareDimension(set)) continue;
    const name = variableName(set.path);
    if (set.type === null) {
      notes.push(`${source.name}: ${name} is ${set.what}, which is no field, and is left out.`);
      continue;
    }
    sets.set(name, set);
    variables.push({
      name,
      type: set.type === "text" ? "char" : set.type,
      dims,
      shape: set.shape,
      attributes: shownAttributes(set.attributes),
    });
  }
  // Along an unlimited dimension a variable may end before others do: what lies beyond was never written.
  const shapes = new Map(
    variables.map(({ name, dims, shape }) => [
      name,
      dims.map((dim, d) =>
        sets.get(name)?.unlimited[d] === true ? (lengths.get(dim)?.length ?? 0) : (shape[d] as number),
      ),
    ]),
  );
  // The latest used last; of each variable one box, so that going through time unpacks each chunk once.
  const kept = new Map<string, Kept>();

  function keep(name: string, box: Box, values: Float64Array): void {
    kept.delete(name);
    kept.set(name, { box, values });
    let held = [...kept.values()].reduce((sum, one) => sum + one.values.length, 0);
    for (const [other, one] of kept) {
      if (held <= MOST_KEPT) break;
      kept.delete(other);
      held -= one.values.length;
    }
  }

  function requireFilters(set: Hdf5Dataset): void {
    const unknown = set.filters.find(({ id }) => !KNOWN_FILTERS.has(id));
    if (unknown !== undefined)
      throw new DataError(
        "FormatError",
        `${source.name}, ${variableName(set.path)}: it is packed with ${unknown.name || "a filter"} (HDF5 filter ${unknown.id}), which is not read. Repack it with deflate, for instance nccopy -d 1.`,
      );
  }

  /** @throws ShapeError for a slab that is not inside the variable. */
  function requireSlab(name: string, start: readonly number[], count: readonly number[]): void {
    const shape = shapes.get(name) as number[];
    const fits =
      start.length === shape.length &&
      count.length === shape.length &&
      shape.every((n, d) => {
        const s = start[d] as number;
        const c = count[d] as number;
        return Number.isInteger(s) && Number.isInteger(c) && s >= 0 && c >= 0 && s + c <= n;
      });
    if (!fits)
      throw new DataError(
        "ShapeError",
        `${source.name}, ${name}: the slab from [${start}] of size [${count}] is not inside the variable's [${shape}].`,
      );
  }

  async function readNumbers(name: string, start: readonly number[], count: readonly number[]): Promise<Float64Array> {
    const set = sets.get(name);
    if (set === undefined || set.type === "text")
      throw new DataError("NotFoundError", `${source.name} holds no variable ${name} of numbers.`);
    requireSlab(name, start, count);
    requireFilters(set);
    const box: Box = { start, count };
    const there = { start, count: count.map((n, d) => Math.min(n, (set.shape[d] as number) - (start[d] as number))) };
    if (there.count.every((n, d) => n === count[d])) return stored(set, name, box);
    const out = new Float64Array(boxSize(box)).fill(Number.NaN);
    if (there.count.some((n) => n <= 0)) return out;
    paste(await stored(set, name, there), there, out, box);
    return out;
  }

  async function readDecoded(
    name: string,
    start: readonly number[],
    count: readonly number[],
    how: Decoding,
    into?: Float64Array,
  ): Promise<Float64Array> {
    const set = sets.get(name);
    const isStraight =
      set !== undefined &&
      set.type !== "text" &&
      kept.get(name) === undefined &&
      set.shape.every((n, d) => (start[d] as number) + (count[d] as number) <= n) &&
      boxSize({ start, count }) > 0 &&
      (set.chunks === null ||
        boxSize(wholeChunks({ start, count }, set.chunks, set.shape)) === boxSize({ start, count }));
    if (isStraight) {
      requireSlab(name, start, count);
      requireFilters(set);
      const values = file.read(set.path, start, count, (numbers) => decoded(numbers, how, into));
      if (values !== null) return values;
    }
    return decodeInPlace(await readNumbers(name, start, count), how);
  }

  /** What the dataset holds of a box inside it. */
  async function stored(set: Hdf5Dataset, name: string, box: Box): Promise<Float64Array> {
    const { shape, chunks, path } = set;
    const { start, count } = box;
    const size = boxSize(box);
    if (size === 0) return new Float64Array(0);
    const held = kept.get(name);
    if (held !== undefined && isInside(box, held.box)) return cutOut(held.values, held.box, box);
    const whole = chunks === null ? box : wholeChunks(box, chunks, shape);
    const more = boxSize(whole);
    if (more === size || more > MOST_KEPT) return file.read(path, start, count, doubles);
    const values = file.read(path, whole.start, whole.count, doubles);
    keep(name, whole, values);
    return cutOut(values, whole, box);
  }

  return {
    name: source.name,
    format: "netCDF-4 (HDF5)",
    dimensions: [...lengths.values()],
    variables: variables.map((variable) => ({ ...variable, shape: shapes.get(variable.name) ?? variable.shape })),
    attributes: shownAttributes(file.attributes),
    notes,
    readNumbers,
    readDecoded,
    async close() {
      kept.clear();
      file.close();
    },
  };
}
