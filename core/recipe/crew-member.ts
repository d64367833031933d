import type { FittedBackground } from "../background/fit.ts";
import type { ChunkPart, Diagnostic } from "../diagnostics/entry.ts";
import type { OpenFile } from "../formats/dataset.ts";
import { OpenRecords } from "../formats/record/open-records.ts";
import { chunkOf, type SlabMemory } from "./chunk-worker.ts";
import type { FromWorker, ToWorker } from "./crew-line.ts";

/** The buffers of a part, each once, for transfer. */
export function buffersOf(part: ChunkPart): ArrayBuffer[] {
  return [...new Set(Object.values(part).map((array) => array.buffer))];
}

/** A worker's end of the line: holds the files open and answers one job after the other. */
export class CrewMember<Source> {
  readonly #open: (source: Source) => Promise<OpenFile>;
  readonly #post: (message: FromWorker, transfer: ArrayBuffer[]) => void;
  readonly #catalogue: readonly Diagnostic[];
  readonly #files = new Map<number, Promise<OpenFile>>();
  readonly #backgrounds = new Map<number, FittedBackground>();
  readonly #memory: SlabMemory = new Map();
  #records = new OpenRecords([]);
  #last: Promise<void> = Promise.resolve();

  constructor(
    open: (source: Source) => Promise<OpenFile>,
    post: (message: FromWorker, transfer: ArrayBuffer[]) => void,
    catalogue: readonly Diagnostic[],
  ) {
    this.#open = open;
    this.#post = post;
    this.#catalogue = catalogue;
  }

  /** Messages are worked off in the order in which they came. */
  receive(message: ToWorker<Source>): Promise<void> {
    this.#last = this.#last.then(() => (message.kind === "files" ? this.#hold(message) : this.#work(message)));
    return this.#last;
  }

  async #hold({ files }: Extract<ToWorker<Source>, { kind: "files" }>): Promise<void> {
    const wanted = new Set(files.map((file) => file.id));
    for (const [id, file] of this.#files) {
      if (wanted.has(id)) continue;
      this.#files.delete(id);
      await file.then((open) => open.close()).catch(() => undefined);
    }
    for (const { id, source } of files) {
      if (this.#files.has(id)) continue;
      const opening = this.#open(source);
      // A file that does not open fails the jobs, not the worker.
      opening.catch(() => undefined);
      this.#files.set(id, opening);
    }
  }

  /** What is open, joined once for all jobs on the same files. */
  async #opened(): Promise<{ open: OpenRecords; failure: unknown }> {
    const settled = await Promise.allSettled(this.#files.values());
    const files = settled.flatMap((outcome) => (outcome.status === "fulfilled" ? [outcome.value] : []));
    const failure = settled.find((outcome) => outcome.status === "rejected")?.reason;
    const isSame =
      files.length === this.#records.files.length && files.every((file, i) => file === this.#records.files[i]);
    if (!isSame) this.#records = new OpenRecords(files);
    return { open: this.#records, failure };
  }

  /** @throws What kept a file from opening, if a field that is asked for is in none of the others. */
  async #recordsWith(keys: readonly string[]): Promise<OpenRecords> {
    const { open, failure } = await this.#opened();
    if (failure !== undefined)
      for (const key of keys) {
        try {
          open.field(key);
        } catch {
          throw failure;
        }
      }
    return open;
  }

  async #work(message: Extract<ToWorker<Source>, { kind: "job" }>): Promise<void> {
    const { number, job, backgrounds, forget } = message;
    try {
      for (const [id, background] of backgrounds) this.#backgrounds.set(id, background);
      for (const id of forget) this.#backgrounds.delete(id);
      const fitted = Object.fromEntries(
        Object.entries(job.fitted).map(([input, id]) => [input, this.#backgrounds.get(id) as FittedBackground]),
      );
      const part = await chunkOf(
        await this.#recordsWith(Object.values(job.fields)),
        { ...job, fitted },
        this.#catalogue,
        this.#memory,
      );
      this.#post({ kind: "done", number, part }, buffersOf(part));
    } catch (error) {
      const { name, message: words } = error instanceof Error ? error : new Error(String(error));
      this.#post({ kind: "failed", number, name, words }, []);
    }
  }
}
