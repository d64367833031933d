import { Dataset, File, Group, type Module as H5Module, Module, ready } from "h5wasm";
import { DataError } from "../../core/errors.ts";
import type { ByteSource } from "../../core/formats/byte-source.ts";
import type { Hdf5Dataset, Hdf5File, Hdf5Library, Hdf5Numbers } from "../../core/formats/libraries.ts";
import type { AttributeValue } from "../../core/formats/variable-store.ts";
import { mounted } from "./mounted-source.ts";

/** A damaged file can promise anything; no real file comes near these. */
const MOST_OBJECTS = 20_000;
const DEEPEST = 32;
const MOST_ATTRIBUTE_BYTES = 1 << 20;
/** One read at most; the store asks for less. */
const MOST_BYTES = 512 * 1024 * 1024;

type Library = typeof H5Module;
/** The part of the compiled library that is memory. */
interface Heap {
  readonly HEAPU8: Uint8Array<ArrayBuffer>;
  _malloc(bytes: number): number;
  _free(place: number): void;
}
type Metadata = ReturnType<Library["get_dataset_metadata"]>;

const CLASSES: Readonly<Record<number, string>> = {
  2: "a date type",
  4: "a bit field",
  5: "opaque",
  6: "compound",
  7: "a reference",
  8: "an enumeration",
  9: "of variable length",
  10: "an array type",
};
const ARRAYS = {
  int8: Int8Array,
  uint8: Uint8Array,
  int16: Int16Array,
  uint16: Uint16Array,
  int32: Int32Array,
  uint32: Uint32Array,
  int64: BigInt64Array,
  uint64: BigUint64Array,
  float32: Float32Array,
  float64: Float64Array,
} as const;
const INTEGER = 0;
const FLOAT = 1;
const TEXT = 3;

function storedType({ type, size, signed, vlen }: Metadata): Hdf5Dataset["type"] {
  if (type === TEXT) return "text";
  if (vlen) return null;
  if (type === FLOAT) return size === 4 ? "float32" : size === 8 ? "float64" : null;
  if (type !== INTEGER) return null;
  const bits = 8 * size;
  if (bits !== 8 && bits !== 16 && bits !== 32 && bits !== 64) return null;
  return `${signed ? "int" : "uint"}${bits}`;
}

function plainNumbers(value: ArrayLike<number | bigint>): AttributeValue {
  const numbers = Array.from(value, Number);
  return numbers.length === 1 ? (numbers[0] as number) : numbers;
}

/** An attribute's value if it is text or numbers and of a sane size; undefined otherwise. */
function attributeValue(library: Library, owner: Group | Dataset, name: string): AttributeValue | undefined {
  const found = library.get_attribute_metadata(owner.file_id, owner.path, name);
  const isText = found.type === TEXT;
  const count = (found.shape ?? []).reduce((product, n) => product * n, 1);
  if (found.shape === null || !(count * Math.max(1, found.size) <= MOST_ATTRIBUTE_BYTES)) return undefined;
  if (!isText && (found.vlen || storedType(found) === null)) return undefined;
  const value: unknown = owner.get_attribute(name, false);
  if (typeof value === "string") return value;
  if (typeof value === "number" || typeof value === "bigint") return Number(value);
  if (Array.isArray(value))
    return value.every((one) => typeof one === "string") ? value.join(", ") : plainNumbers(value);
  return ArrayBuffer.isView(value) ? plainNumbers(value as unknown as ArrayLike<number | bigint>) : undefined;
}

function attributesOf(library: Library, owner: Group | Dataset): Record<string, AttributeValue> {
  const found: Record<string, AttributeValue> = Object.create(null);
  for (const name of library.get_attribute_names(owner.file_id, owner.path)) {
    const value = attributeValue(library, owner, name);
    if (value !== undefined) found[name] = value;
  }
  return found;
}

function described(library: Library, set: Dataset): Hdf5Dataset {
  const metadata = set.metadata;
  const shape = metadata.shape ?? [];
  return {
    path: set.path,
    type: metadata.shape === null ? null : storedType(metadata),
    what: CLASSES[metadata.type] ?? (metadata.shape === null ? "empty" : `of ${metadata.size} bytes`),
    shape,
    unlimited: shape.map((_, d) => (metadata.maxshape?.[d] ?? 0) > Number.MAX_SAFE_INTEGER),
    chunks: metadata.chunks,
    filters: set.filters.map(({ id, name }) => ({ id, name })),
    attributes: attributesOf(library, set),
    isScale: library.get_scale_name(set.file_id, set.path) !== null,
  };
}

/** The library's own words, shortened to the line that says most: the innermost of its stack. */
function reasonOf(error: unknown): string {
  const text = error instanceof Error ? error.message : String(error);
  const lines = text.split("\n").map((line) => line.trim());
  const inner = lines.filter((line) => /^(major|minor|#\d+)/.test(line) || line.length > 0);
  return (inner[0] ?? "no reason given").slice(0, 160);
}

class OpenHdf5 implements Hdf5File {
  readonly attributes: Readonly<Record<string, AttributeValue>>;
  readonly datasets: readonly Hdf5Dataset[];
  readonly notes: readonly string[];
  readonly #library: Library;
  readonly #name: string;
  readonly #file: File;
  readonly #unmount: () => void;
  #visited = 0;
  readonly #sets = new Map<string, Dataset>();

  constructor(library: Library, source: ByteSource) {
    this.#library = library;
    this.#name = source.name;
    const place = mounted(library.FS, source);
    this.#unmount = place.unmount;
    try {
      this.#file = new File(place.path, "r");
      this.attributes = attributesOf(library, this.#file);
      const datasets: Hdf5Dataset[] = [];
      const notes: string[] = [];
      this.#walk(this.#file, 0, datasets, notes);
      this.datasets = datasets;
      this.notes = notes;
    } catch (error) {
      place.unmount();
      throw this.#damaged("it cannot be opened", place.failure() ?? error);
    }
  }

  #damaged(what: string, error: unknown): DataError {
    if (error instanceof DataError) return error;
    return new DataError(
      "FormatError",
      `${this.#name}: ${what} as HDF5 (${reasonOf(error)}). The file is damaged or cut short; fetch or copy it again.`,
      error,
    );
  }

  #walk(group: Group, depth: number, datasets: Hdf5Dataset[], notes: string[]): void {
    if (depth > DEEPEST)
      throw new DataError("FormatError", `${this.#name}: groups lie over ${DEEPEST} deep; the file is damaged.`);
    for (const name of group.keys()) {
      this.#visited += 1;
      // Groups of a damaged file may hold one another.
      if (this.#visited > MOST_OBJECTS)
        throw new DataError(
          "FormatError",
          `${this.#name}: over ${MOST_OBJECTS} objects were found; the file is damaged.`,
        );
      const path = `${group.path === "/" ? "" : group.path}/${name}`;
      try {
        const found = group.get(name);
        if (found instanceof Group) this.#walk(found, depth + 1, datasets, notes);
        else if (found instanceof Dataset) {
          datasets.push(described(this.#library, found));
          this.#sets.set(found.path, found);
        }
      } catch (error) {
        if (error instanceof DataError) throw error;
        notes.push(`${this.#name}: ${path} cannot be read (${reasonOf(error)}) and is left out.`);
      }
    }
  }

  scale(path: string, dimension: number): string | null {
    try {
      const set = this.#sets.get(path);
      return set === undefined ? null : (set.get_attached_scales(dimension)[0] ?? null);
    } catch {
      return null;
    }
  }

  read<T>(path: string, start: readonly number[], count: readonly number[], take: (numbers: Hdf5Numbers) => T): T {
    const set = this.#sets.get(path);
    if (set === undefined) throw new DataError("NotFoundError", `${this.#name} holds no dataset ${path}.`);
    const { metadata } = set;
    const bytes = count.reduce((product, n) => product * n, metadata.size);
    if (!(bytes <= MOST_BYTES))
      throw new DataError("ShapeError", `${this.#name}, ${path}: ${bytes} bytes at once are too many; ask for less.`);
    const type = storedType(metadata);
    const numbers = type === null || type === "text" || count.length === 0 ? undefined : ARRAYS[type];
    if (numbers === undefined || !metadata.littleEndian) return take(this.#sliced(set, start, count));
    const library = this.#library as unknown as Heap & Library;
    const place = library._malloc(bytes);
    if (place === 0) throw new DataError("ShapeError", `${this.#name}, ${path}: no memory for ${bytes} bytes.`);
    try {
      const strides = count.map(() => 1n);
      library.get_dataset_data(set.file_id, path, count.map(BigInt), start.map(BigInt), strides, BigInt(place));
    } catch (error) {
      library._free(place);
      throw this.#damaged(`${path} cannot be read`, error);
    }
    try {
      // The memory may have grown while the library read: its buffer is asked for only now.
      return take(new numbers(library.HEAPU8.buffer, place, bytes / metadata.size));
    } finally {
      library._free(place);
    }
  }

  /** The same by the library's own way, which turns bytes round where that is needed. */
  #sliced(set: Dataset, start: readonly number[], count: readonly number[]): Hdf5Numbers {
    try {
      const value: unknown =
        count.length === 0 ? set.value : set.slice(count.map((n, d) => [start[d] as number, (start[d] as number) + n]));
      if (typeof value === "number") return Float64Array.of(value);
      if (typeof value === "bigint") return BigInt64Array.of(value);
      if (ArrayBuffer.isView(value)) return value as Hdf5Numbers;
    } catch (error) {
      throw this.#damaged(`${set.path} cannot be read`, error);
    }
    throw this.#damaged(`${set.path} cannot be read`, new Error("it holds no numbers"));
  }

  close(): void {
    this.#sets.clear();
    try {
      this.#file.close();
    } finally {
      this.#unmount();
    }
  }
}

/** The HDF5 library, compiled to WebAssembly, loaded when first asked for. */
export async function hdf5Library(): Promise<Hdf5Library> {
  await ready;
  // Without this a damaged chunk gives garbage and says nothing.
  Module.activate_throwing_error_handler();
  return { open: (source) => new OpenHdf5(Module, source) };
}
