import { DataError } from "../../errors.ts";
import { swap2, swap4, swap8 } from "./swap.ts";

export type WrittenAttribute = string | number | Float64Array | Float32Array | Int32Array | Int16Array | Int8Array;
export type WrittenNumbers = Float64Array | Float32Array | Int32Array | Int16Array | Int8Array;

export interface WrittenVariable {
  readonly name: string;
  /** Names of dimensions, slowest first. */
  readonly dims: readonly string[];
  readonly attributes: Readonly<Record<string, WrittenAttribute>>;
  /** Row-major; its kind of array decides the type in the file. */
  readonly data: WrittenNumbers;
}

/** A whole file of fixed dimensions. */
export interface WrittenFile {
  readonly dimensions: Readonly<Record<string, number>>;
  readonly attributes: Readonly<Record<string, WrittenAttribute>>;
  readonly variables: readonly WrittenVariable[];
}

const TYPE = { int8: 1, char: 2, int16: 3, int32: 4, float32: 5, float64: 6 } as const;
const LARGEST_CDF1 = 2 ** 31 - 4;
/** Only the last variable of a 64-bit offset file may hold more: its size is a 32-bit number for all others. */
const LARGEST_VARIABLE = 2 ** 32 - 4;
const LONGEST_DIMENSION = 2 ** 31 - 4;
/** Bytes that are turned round at a time, so that no second copy of a large variable is made. */
const PIECE = 1024 * 1024;

function typeOf(data: WrittenNumbers): number {
  if (data instanceof Float64Array) return TYPE.float64;
  if (data instanceof Float32Array) return TYPE.float32;
  if (data instanceof Int32Array) return TYPE.int32;
  return data instanceof Int16Array ? TYPE.int16 : TYPE.int8;
}

/** Big-endian bytes of numbers, in `memory`, which must be large enough, or in a buffer of their own. */
function bigEndian(data: WrittenNumbers, memory?: ArrayBuffer): Uint8Array<ArrayBuffer> {
  const length = data.byteLength;
  const bytes = new Uint8Array(memory ?? new ArrayBuffer(length), 0, length);
  bytes.set(new Uint8Array(data.buffer, data.byteOffset, length));
  if (data instanceof Int16Array) swap2(new Uint16Array(bytes.buffer, 0, length / 2));
  else if (data instanceof Float64Array) swap8(new Uint32Array(bytes.buffer, 0, length / 4));
  else if (!(data instanceof Int8Array)) swap4(new Uint32Array(bytes.buffer, 0, length / 4));
  return bytes;
}

/** Grows by whole items: the header is small. */
class HeaderWriter {
  readonly #bytes: number[] = [];
  get length(): number {
    return this.#bytes.length;
  }
  uint32(value: number): void {
    this.#bytes.push((value >>> 24) & 255, (value >>> 16) & 255, (value >>> 8) & 255, value & 255);
  }
  uint64(value: number): void {
    this.uint32(Math.floor(value / 2 ** 32));
    this.uint32(value >>> 0);
  }
  padded(bytes: Uint8Array): void {
    for (const byte of bytes) this.#bytes.push(byte);
    while (this.#bytes.length % 4 !== 0) this.#bytes.push(0);
  }
  text(text: string): void {
    const bytes = new TextEncoder().encode(text);
    this.uint32(bytes.length);
    this.padded(bytes);
  }
  attributes(attributes: Readonly<Record<string, WrittenAttribute>>): void {
    const entries = Object.entries(attributes);
    this.uint32(entries.length === 0 ? 0 : 12);
    this.uint32(entries.length);
    for (const [name, value] of entries) {
      this.text(name);
      if (typeof value === "string") {
        this.uint32(TYPE.char);
        this.text(value);
        continue;
      }
      const numbers = typeof value === "number" ? Float64Array.of(value) : value;
      this.uint32(typeOf(numbers));
      this.uint32(numbers.length);
      this.padded(bigEndian(numbers));
    }
  }
  bytes(): Uint8Array<ArrayBuffer> {
    return Uint8Array.from(this.#bytes);
  }
}

function headerBytes(file: WrittenFile, version: 1 | 2, begins: readonly number[]): Uint8Array<ArrayBuffer> {
  const names = Object.keys(file.dimensions);
  const header = new HeaderWriter();
  header.padded(Uint8Array.of(0x43, 0x44, 0x46, version));
  header.uint32(0);
  header.uint32(names.length === 0 ? 0 : 10);
  header.uint32(names.length);
  for (const name of names) {
    header.text(name);
    header.uint32(file.dimensions[name] as number);
  }
  header.attributes(file.attributes);
  header.uint32(file.variables.length === 0 ? 0 : 11);
  header.uint32(file.variables.length);
  file.variables.forEach((variable, i) => {
    header.text(variable.name);
    header.uint32(variable.dims.length);
    for (const dim of variable.dims) header.uint32(names.indexOf(dim));
    header.attributes(variable.attributes);
    header.uint32(typeOf(variable.data));
    header.uint32(Math.min(paddedBytes(variable.data), 0xffffffff));
    if (version === 1) header.uint32(begins[i] as number);
    else header.uint64(begins[i] as number);
  });
  return header.bytes();
}

function paddedBytes(data: WrittenNumbers): number {
  return Math.ceil(data.byteLength / 4) * 4;
}

function checkFile(file: WrittenFile): void {
  for (const [name, length] of Object.entries(file.dimensions))
    if (!Number.isInteger(length) || length < 1 || length > LONGEST_DIMENSION)
      throw new DataError("ShapeError", `Dimension ${name} of length ${length} cannot be written.`);
  const seen = new Set<string>();
  file.variables.forEach(({ name, dims, data }, i) => {
    if (seen.has(name)) throw new DataError("ShapeError", `Variable ${name} would be written twice.`);
    seen.add(name);
    const unknown = dims.find((dim) => !Object.hasOwn(file.dimensions, dim));
    if (unknown !== undefined)
      throw new DataError("ShapeError", `Variable ${name} names a dimension ${unknown} that the file does not have.`);
    const size = dims.reduce((product, dim) => product * (file.dimensions[dim] as number), 1);
    if (size !== data.length)
      throw new DataError(
        "ShapeError",
        `Variable ${name} has ${data.length} values; its dimensions ${dims.join(", ")} hold ${size}.`,
      );
    if (data.byteLength > LARGEST_VARIABLE && i < file.variables.length - 1)
      throw new DataError(
        "ShapeError",
        `Variable ${name} has ${data.byteLength} bytes; netCDF 64-bit offset holds ${LARGEST_VARIABLE} of each but the last. Write it in pieces, or last.`,
      );
  });
}

/**
 * A netCDF classic file, piece by piece in the order of the file; 64-bit offset where it grows over 2 GiB.
 *
 * Source: NetCDF Classic Format Specification (Unidata).
 *
 * @param isFleeting True where each piece is done with before the next is asked for: they then share memory.
 * @throws ShapeError, before the first piece, if a variable does not fit its dimensions or is too large for the format.
 */
export function* classicFile(file: WrittenFile, isFleeting = false): Generator<Uint8Array<ArrayBuffer>, void> {
  checkFile(file);
  const none = file.variables.map(() => 0);
  const total = file.variables.reduce((sum, { data }) => sum + paddedBytes(data), 0);
  const version = headerBytes(file, 1, none).length + total > LARGEST_CDF1 ? 2 : 1;
  let at = headerBytes(file, version, none).length;
  const begins = file.variables.map(({ data }) => {
    const begin = at;
    at += paddedBytes(data);
    return begin;
  });
  yield headerBytes(file, version, begins);
  const memory = isFleeting ? new ArrayBuffer(PIECE) : undefined;
  for (const { data } of file.variables) {
    const each = Math.floor(PIECE / data.BYTES_PER_ELEMENT);
    for (let from = 0; from < data.length; from += each) yield bigEndian(data.subarray(from, from + each), memory);
    const padding = paddedBytes(data) - data.byteLength;
    if (padding > 0) yield new Uint8Array(padding);
  }
}
