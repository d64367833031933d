import { DataError } from "../../errors.ts";
import type { ByteSource } from "../byte-source.ts";
import { type Decoding, decodeInPlace } from "../cf/decoding.ts";
import type { StoredDimension, StoredVariable, VariableStore } from "../variable-store.ts";
import { decodeBigEndian, isDecodable } from "./decoding-kernel.ts";
import { classicHeader } from "./header.ts";
import { PrefixEnds } from "./header-bytes.ts";
import { type Batch, batchesOf, runsOf } from "./runs.ts";
import { numbersOf } from "./swap.ts";
import type { ClassicHeader, ClassicVariable } from "./types.ts";

const FIRST_PREFIX = 64 * 1024;
/** No real header comes near this; a damaged one must not pull a whole file into memory. */
const MOST_HEADER = 32 * 1024 * 1024;

/** Bytes up to which reads go out many at a time. */
const SMALL_READ = 1024;
const READS_AT_ONCE = 64;
const NO_BYTES = new Uint8Array(0);

const FORMATS = {
  1: "netCDF classic (CDF-1)",
  2: "netCDF 64-bit offset (CDF-2)",
  5: "netCDF 64-bit data (CDF-5)",
} as const;

async function headerOf(source: ByteSource): Promise<ClassicHeader> {
  let length = Math.min(FIRST_PREFIX, source.size);
  for (;;) {
    const prefix = await source.read(0, length);
    try {
      return classicHeader(prefix, source.name, source.size);
    } catch (error) {
      if (!(error instanceof PrefixEnds)) throw error;
      if (error.needed > MOST_HEADER || length >= source.size)
        throw new DataError(
          "FormatError",
          `${source.name}: the netCDF header does not end within ${MOST_HEADER} bytes; the file is damaged. Fetch or copy it again.`,
          error,
        );
      length = Math.min(source.size, MOST_HEADER, Math.max(4 * length, error.needed));
    }
  }
}

/** Records that are really there, and words about those that are not. */
function wholeRecords(header: ClassicHeader, source: ByteSource): { records: number; note: string | null } {
  const inRecord = header.variables.filter(({ isRecord }) => isRecord);
  if (inRecord.length === 0 || header.recordStride === 0) return { records: header.records ?? 0, note: null };
  const begin = inRecord.reduce((least, variable) => Math.min(least, variable.begin), Number.POSITIVE_INFINITY);
  // The last record counts as whole when all of its values are there, whether or not the padding behind them is.
  const end = inRecord.reduce((most, variable) => Math.max(most, variable.begin + variable.dataBytes), 0);
  const room = source.size < end ? 0 : Math.floor((source.size - end) / header.recordStride) + 1;
  if (header.records === null) return { records: room, note: null };
  if (room >= header.records) return { records: header.records, note: null };
  return {
    records: room,
    note:
      `${source.name} is cut short: its header promises ${header.records} records, ${room} are whole` +
      `${source.size < begin ? " (the records are missing altogether)" : ""}. The whole ones are used; fetch the file again for the rest.`,
  };
}

/**
 * Open a netCDF classic, 64-bit offset or CDF-5 file: the header is read, and nothing else.
 *
 * @throws FormatError in words for a header that is damaged or cut.
 */
export async function openNetcdfClassic(source: ByteSource): Promise<VariableStore> {
  const header = await headerOf(source);
  const { records, note } = wholeRecords(header, source);
  const notes = note === null ? [] : [note];
  const recordDimension = header.dimensions.findIndex(({ length }) => length === 0);
  const dimensions: StoredDimension[] = header.dimensions.map(({ name, length }, i) => ({
    name,
    length: i === recordDimension ? records : length,
    isRecord: i === recordDimension,
  }));
  const shapeOf = (variable: ClassicVariable) =>
    variable.dimIds.map((id) => (dimensions[id] as StoredDimension).length);
  for (const variable of header.variables) {
    if (!variable.isRecord && variable.begin + variable.dataBytes > source.size)
      notes.push(`${source.name} is cut short: variable ${variable.name} is not whole. Fetch the file again.`);
  }
  const laidOut = new Map(header.variables.map((variable) => [variable.name, variable]));
  const variables: StoredVariable[] = header.variables.map((variable) => ({
    name: variable.name,
    type: variable.type,
    dims: variable.dimIds.map((id) => (dimensions[id] as StoredDimension).name),
    shape: shapeOf(variable),
    attributes: variable.attributes,
  }));

  // Memory of the last read, for the next: asking the system for fresh memory takes as long as decoding into it.
  let spare: Uint8Array<ArrayBuffer> = NO_BYTES;

  /** Bytes of a hyperslab, stretch by stretch, to `take`. */
  async function readRuns(
    name: string,
    start: readonly number[],
    count: readonly number[],
    take: (variable: ClassicVariable, values: number) => (raw: Uint8Array<ArrayBuffer>, into: number) => void,
  ): Promise<void> {
    const variable = laidOut.get(name);
    if (variable === undefined) throw new DataError("NotFoundError", `${source.name} holds no variable ${name}.`);
    const shape = shapeOf(variable);
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
    const bytes = variable.bytesPerValue;
    const strides = new Array<number>(shape.length);
    for (let d = shape.length - 1, step = bytes; d >= 0; d--) {
      strides[d] = d === 0 && variable.isRecord ? header.recordStride : step;
      step *= shape[d] as number;
    }
    const values = count.reduce((product, n) => product * n, 1);
    // A damaged header can promise any size: what the file cannot hold is refused before memory is taken for it.
    const end = count.reduce(
      (sum, n, d) => sum + ((start[d] as number) + n - 1) * (strides[d] as number),
      variable.begin + bytes,
    );
    if (values > 0 && !(end <= source.size))
      throw new DataError(
        "FormatError",
        `${source.name}, ${name}: the file ends at byte ${source.size}, inside this variable. It is cut short; fetch it again.`,
      );
    const put = take(variable, values);
    const batches = batchesOf(runsOf(variable.begin, shape, start, count, strides, bytes), bytes);
    const longest = batches.reduce((most, { length }) => Math.max(most, length), 0);
    const give = (raw: Uint8Array<ArrayBuffer>, batch: Batch): void => {
      for (const run of batch.runs) {
        const from = run.offset - batch.offset;
        const whole = from === 0 && run.values * bytes === raw.length;
        put(whole ? raw : raw.subarray(from, from + run.values * bytes), run.into);
      }
    };
    if (longest <= SMALL_READ) {
      // The times of a long record lie one in each record, far apart: waiting for each in turn would take seconds.
      for (let i = 0; i < batches.length; i += READS_AT_ONCE) {
        const some = batches.slice(i, i + READS_AT_ONCE);
        const raws = await Promise.all(some.map(({ offset, length }) => source.read(offset, length)));
        some.forEach((batch, k) => {
          give(raws[k] as Uint8Array<ArrayBuffer>, batch);
        });
      }
      return;
    }
    // Reads that overlap in time each have memory of their own.
    const memory = spare.length >= longest && longest > 0 ? spare : new Uint8Array(longest);
    spare = NO_BYTES;
    for (const batch of batches) {
      give(await source.read(batch.offset, batch.length, memory), batch);
    }
    spare = memory;
  }

  async function readNumbers(name: string, start: readonly number[], count: readonly number[]): Promise<Float64Array> {
    let out = new Float64Array(0);
    await readRuns(name, start, count, ({ type }, values) => {
      out = new Float64Array(values);
      // Turned round in place, so a piece of a longer read needs a buffer of its own.
      return (raw, into) => out.set(numbersOf(raw.length === raw.buffer.byteLength ? raw : raw.slice(), type), into);
    });
    return out;
  }

  async function readDecoded(
    name: string,
    start: readonly number[],
    count: readonly number[],
    how: Decoding,
    into?: Float64Array,
  ): Promise<Float64Array> {
    const type = laidOut.get(name)?.type ?? "char";
    if (!isDecodable(type, how)) return decodeInPlace(await readNumbers(name, start, count), how);
    let out: Float64Array = new Float64Array(0);
    await readRuns(name, start, count, (_, values) => {
      out = into?.length === values ? into : new Float64Array(values);
      return (raw, at) => decodeBigEndian(raw, type, how, out, at);
    });
    return out;
  }

  return {
    name: source.name,
    format: FORMATS[header.version],
    dimensions,
    variables,
    attributes: header.attributes,
    notes,
    readNumbers,
    readDecoded,
    close: async () => undefined,
  };
}
