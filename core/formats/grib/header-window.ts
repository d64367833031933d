import { DataError } from "../../errors.ts";
import type { ByteSource } from "../byte-source.ts";

/** Bytes fetched together: a header without its bitmap and lists fits. */
const SMALL = 4096;
/** Fetched together where messages are small, or padding is looked through. */
const LARGE = 65_536;
const READS_AT_ONCE = 32;

/** Small pieces of a file, read through one window that moves along. */
export class HeaderWindow {
  readonly #source: ByteSource;
  #bytes: Uint8Array = new Uint8Array(0);
  #from = 0;
  #reads = 0;
  /** Set where a message is shorter than a large window: then several headers come at once. */
  isDense = false;

  constructor(source: ByteSource) {
    this.#source = source;
  }

  get size(): number {
    return this.#source.size;
  }

  /**
   * Bytes from `at`; a view that lasts until the next call.
   *
   * @throws FormatError if they are not inside the file.
   */
  async bytes(at: number, length: number): Promise<Uint8Array> {
    if (!(at >= 0 && at + length <= this.size))
      throw new DataError("FormatError", `it would reach byte ${at + length} of a file of ${this.size}`);
    const start = at - this.#from;
    if (start < 0 || start + length > this.#bytes.length) {
      const some = Math.max(length, this.isDense ? LARGE : SMALL);
      const fetched = Math.min(some, this.size - at);
      this.#reads += 1;
      // At once: tens of thousands of small reads take a tenth of the time so. Now and then the thread is let go, for whoever asks it.
      const isWaiting = this.#reads % READS_AT_ONCE === 0;
      this.#bytes = isWaiting ? await this.#source.read(at, fetched) : this.#source.readNow(at, fetched);
      this.#from = at;
      return this.#bytes.subarray(0, length);
    }
    return this.#bytes.subarray(start, start + length);
  }

  /** Where "GRIB" next stands at or after `at`; −1 if nowhere. */
  async nextGrib(at: number): Promise<number> {
    for (let from = at; from + 8 <= this.size; ) {
      // What is at hand is looked through first: padding between messages is short.
      const held = this.#from + this.#bytes.length - from;
      const isHeld = from >= this.#from && held >= 8;
      const length = isHeld ? held : Math.min(LARGE, this.size - from);
      const bytes = await this.bytes(from, length);
      // 71 = "G".
      for (let i = bytes.indexOf(71); i >= 0 && i + 4 <= length; i = bytes.indexOf(71, i + 1))
        if (bytes[i + 1] === 82 && bytes[i + 2] === 73 && bytes[i + 3] === 66) return from + i;
      from += length - 3;
    }
    return -1;
  }
}
