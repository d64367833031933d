import type { ByteSource } from "../../core/formats/byte-source.ts";

/** What is used of an Emscripten file system. */
interface FileSystem {
  createFile(parent: string, name: string, properties: object, canRead: boolean, canWrite: boolean): unknown;
  unlink(path: string): void;
}

interface Node {
  stream_ops: Record<string, unknown>;
}

export interface MountedSource {
  readonly path: string;
  /** What the source threw, if reading failed: the library only says that it did. */
  failure(): unknown;
  unmount(): void;
}

/** Bytes of a block that is fetched together: metadata is read in many small pieces. */
const BLOCK = 64 * 1024;
const MOST_BLOCKS = 64;
/** A longer read goes straight through. */
const LONG = 4 * BLOCK;

let counter = 0;

/** Blocks of a source, the latest used kept. */
class Blocks {
  readonly #source: ByteSource;
  readonly #held = new Map<number, Uint8Array>();

  constructor(source: ByteSource) {
    this.#source = source;
  }

  #block(index: number): Uint8Array {
    const held = this.#held.get(index);
    if (held !== undefined) {
      this.#held.delete(index);
      this.#held.set(index, held);
      return held;
    }
    const offset = index * BLOCK;
    const bytes = this.#source.readNow(offset, Math.min(BLOCK, this.#source.size - offset));
    this.#held.set(index, bytes);
    if (this.#held.size > MOST_BLOCKS) this.#held.delete(this.#held.keys().next().value as number);
    return bytes;
  }

  /** Fill `into` from `position`; both are inside the source. */
  fill(into: Uint8Array, position: number): void {
    if (into.length >= LONG) {
      into.set(this.#source.readNow(position, into.length));
      return;
    }
    for (let done = 0; done < into.length; ) {
      const at = position + done;
      const bytes = this.#block(Math.floor(at / BLOCK));
      const from = at % BLOCK;
      const some = Math.min(bytes.length - from, into.length - done);
      into.set(bytes.subarray(from, from + some), done);
      done += some;
    }
  }
}

/**
 * A source as a file of an Emscripten file system: its bytes are fetched when the library reads them, never all at once.
 *
 * One way for window and batch alike, and for files of any size.
 */
export function mounted(fs: unknown, source: ByteSource): MountedSource {
  const system = fs as FileSystem;
  counter += 1;
  const name = `source-${counter}`;
  const node = system.createFile("/", name, {}, true, false) as Node;
  const blocks = new Blocks(source);
  let failure: unknown;
  Object.defineProperty(node, "usedBytes", { get: () => source.size });
  node.stream_ops = {
    ...node.stream_ops,
    read(_stream: unknown, heap: Int8Array, offset: number, length: number, position: number): number {
      const some = Math.max(0, Math.min(length, source.size - position));
      if (some === 0) return 0;
      try {
        blocks.fill(new Uint8Array(heap.buffer, heap.byteOffset + offset, some), position);
      } catch (error) {
        failure ??= error;
        throw error;
      }
      return some;
    },
    mmap: undefined,
  };
  return {
    path: `/${name}`,
    failure: () => failure,
    unmount: () => system.unlink(`/${name}`),
  };
}
