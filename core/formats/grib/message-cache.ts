import type { ByteSource } from "../byte-source.ts";
import type { FormatLibraries } from "../libraries.ts";
import { decodedMessage } from "./decode-message.ts";
import type { GribEntry } from "./grib-index.ts";

const MOST_MESSAGES = 8;
const MOST_BYTES = 128 * 2 ** 20;

interface Held {
  readonly values: Promise<Float64Array>;
  readonly bytes: number;
}

/** The last decoded messages: rows read chunk by chunk do not decode a message again and again. */
export class MessageCache {
  readonly #source: ByteSource;
  readonly #libraries: FormatLibraries;
  /** In the order of their last use. */
  readonly #held = new Map<GribEntry, Held>();
  #bytes = 0;

  constructor(source: ByteSource, libraries: FormatLibraries) {
    this.#source = source;
    this.#libraries = libraries;
  }

  #drop(entry: GribEntry): void {
    this.#bytes -= this.#held.get(entry)?.bytes ?? 0;
    this.#held.delete(entry);
  }

  /**
   * Numbers of a message in the order of the file; not to be changed.
   *
   * @throws FormatError as decoding does.
   */
  values(entry: GribEntry, points: number): Promise<Float64Array> {
    const held = this.#held.get(entry);
    if (held !== undefined) {
      this.#held.delete(entry);
      this.#held.set(entry, held);
      return held.values;
    }
    const values = decodedMessage(this.#source, entry, points, this.#libraries);
    const bytes = 8 * points;
    this.#held.set(entry, { values, bytes });
    this.#bytes += bytes;
    for (const oldest of this.#held.keys()) {
      if (this.#held.size === 1 || (this.#held.size <= MOST_MESSAGES && this.#bytes <= MOST_BYTES)) break;
      this.#drop(oldest);
    }
    // What failed is not kept: the next read says why again.
    values.catch(() => {
      if (this.#held.get(entry)?.values === values) this.#drop(entry);
    });
    return values;
  }

  clear(): void {
    this.#held.clear();
    this.#bytes = 0;
  }
}
