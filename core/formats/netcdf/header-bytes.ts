import { DataError } from "../../errors.ts";

const STREAMING = 0xffffffff;

/** Thrown when the bytes at hand end before the header does; the caller fetches more. */
export class PrefixEnds extends Error {
  readonly needed: number;
  constructor(needed: number) {
    super(`the header goes on to byte ${needed} at least`);
    this.needed = needed;
  }
}

/** Walks the big-endian items of a netCDF classic header, and says where when one is impossible. */
export class HeaderBytes {
  readonly #bytes: Uint8Array;
  readonly #view: DataView;
  readonly #fileName: string;
  readonly #fileSize: number;
  offset = 0;

  constructor(bytes: Uint8Array, fileName: string, fileSize: number) {
    this.#bytes = bytes;
    this.#view = new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength);
    this.#fileName = fileName;
    this.#fileSize = fileSize;
  }

  /** An error in words about what stands at `at`. */
  wrong(what: string, at = this.offset): DataError {
    return new DataError(
      "FormatError",
      `${this.#fileName}: the netCDF header is damaged at byte ${at}: ${what}. Fetch or copy the file again.`,
    );
  }

  need(bytes: number): void {
    const end = this.offset + bytes;
    if (end > this.#fileSize) throw this.wrong(`it goes on beyond the file's ${this.#fileSize} bytes`);
    if (end > this.#bytes.length) throw new PrefixEnds(end);
  }

  uint32(): number {
    this.need(4);
    const value = this.#view.getUint32(this.offset);
    this.offset += 4;
    return value;
  }

  /** A 64-bit count or offset. */
  uint64(what: string): number {
    this.need(8);
    const value = this.#view.getUint32(this.offset) * 2 ** 32 + this.#view.getUint32(this.offset + 4);
    if (value > Number.MAX_SAFE_INTEGER) throw this.wrong(`${what} is impossibly large`);
    this.offset += 8;
    return value;
  }

  /** The number of records; null while a file is being streamed (all bits set). */
  recordCount(wide: boolean): number | null {
    this.need(wide ? 8 : 4);
    const first = this.#view.getUint32(this.offset);
    const isStreaming = first === STREAMING && (!wide || this.#view.getUint32(this.offset + 4) === STREAMING);
    if (!isStreaming) return wide ? this.uint64("the number of records") : this.uint32();
    this.offset += wide ? 8 : 4;
    return null;
  }

  /** Number of items of at least `itemBytes` each, which must fit into what is left of the file. */
  fitting(count: number, itemBytes: number, what: string): number {
    if (count * itemBytes > this.#fileSize - this.offset) throw this.wrong(`${count} ${what} do not fit into the file`);
    return count;
  }

  /** A view of `length` bytes, padded to a whole number of 4. */
  padded(length: number): Uint8Array {
    const whole = Math.ceil(length / 4) * 4;
    this.need(whole);
    const bytes = this.#bytes.subarray(this.offset, this.offset + length);
    this.offset += whole;
    return bytes;
  }
}
