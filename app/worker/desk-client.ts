import * as Comlink from "comlink";
import { DataError } from "../../core/errors.ts";
import type { Correction } from "../../core/formats/dataset.ts";
import type { Desk, OpenReport, SourceDescription, TaskProgress } from "./desk.ts";

/** The part of Worker that the client needs; tests give a MessagePort with an ending of its own. */
export interface DeskWorker extends Comlink.Endpoint {
  onerror: ((event: ErrorEvent) => void) | null;
  onmessageerror: ((event: MessageEvent) => void) | null;
  terminate(): void;
}

export interface DeskClient extends Desk {
  /** Stop the worker for good. */
  end(): void;
}

export interface DeskClientParts {
  readonly start: () => DeskWorker;
  /** How often a worker with work is asked whether it lives, and how long it may take to answer; milliseconds. */
  readonly askEvery: number;
  readonly answerWithin: number;
  /** The same while a file is opened. */
  readonly openWithin: number;
}

type RemoteDesk = Comlink.Remote<Desk & { ping(): boolean }>;

/** A running worker, and the means to tell all its callers that it died. */
interface Life {
  readonly remote: RemoteDesk;
  readonly worker: DeskWorker;
  /** Rejects once the worker is dead. */
  readonly death: Promise<never>;
  die(words: string): void;
  /** Settles when the files of its forerunner are open again. */
  restored: Promise<void>;
  pending: number;
  isWatched: boolean;
}

interface Opened {
  readonly source: SourceDescription;
  readonly corrections: readonly Correction[];
}

const BROWSER: DeskClientParts = {
  start: () => new Worker(new URL("./desk-worker.ts", import.meta.url), { type: "module" }),
  askEvery: 5000,
  // A single chunk or a result's last step may keep the worker's thread busy; a minute is no longer that.
  answerWithin: 60_000,
  openWithin: 5000,
};

function nameOf(source: SourceDescription): string {
  if (source.kind === "file") return source.file.name;
  return source.kind === "range" ? source.name : source.path;
}

/** Addresses are resolved here: a worker's own base is where its script lies. */
function absolute(source: SourceDescription): SourceDescription {
  if (source.kind !== "range" || typeof location === "undefined") return source;
  return { ...source, url: new URL(source.url, location.href).href };
}

/**
 * The window's side of the desk. It alone owns the worker's life: a worker that does not load, dies or falls silent
 * fails every call under way in words, and the next call finds a new one with the same files open.
 */
class RestartingDesk implements DeskClient {
  readonly #parts: DeskClientParts;
  readonly #files = new Map<string, Opened>();
  #life: Life | null = null;
  #listener: ((progress: TaskProgress) => void) | null = null;
  #ended = false;

  constructor(parts: DeskClientParts) {
    this.#parts = parts;
  }

  async open(sources: readonly SourceDescription[], corrections: readonly Correction[]): Promise<OpenReport> {
    const resolved = sources.map(absolute);
    const reports = [];
    // One by one, so that it is known which source became which file.
    for (const source of resolved) {
      const report = await this.#call((desk) => desk.open([source], corrections), nameOf(source));
      for (const { file } of report.opened) this.#files.set(file, { source, corrections });
      reports.push(report);
    }
    return {
      opened: reports.flatMap((report) => report.opened),
      refused: reports.flatMap((report) => report.refused),
    };
  }

  async correct(file: string, corrections: readonly Correction[]) {
    const contents = await this.#call((desk) => desk.correct(file, corrections), file);
    const opened = this.#files.get(file);
    if (opened !== undefined) this.#files.set(file, { ...opened, corrections });
    return contents;
  }

  async close(file: string): Promise<void> {
    this.#files.delete(file);
    await this.#call((desk) => desk.close(file));
  }

  prepareBackground: Desk["prepareBackground"] = (...args) => this.#call((desk) => desk.prepareBackground(...args));
  frame: Desk["frame"] = (...args) => this.#call((desk) => desk.frame(...args));
  ribbon: Desk["ribbon"] = (...args) => this.#call((desk) => desk.ribbon(...args));
  runRecipe: Desk["runRecipe"] = (...args) => this.#call((desk) => desk.runRecipe(...args));
  cancel: Desk["cancel"] = (task) => this.#call((desk) => desk.cancel(task));

  async onProgress(callback: (progress: TaskProgress) => void): Promise<void> {
    this.#listener = callback;
    await this.#call((desk) => desk.onProgress(Comlink.proxy(callback)));
  }

  end(): void {
    this.#ended = true;
    this.#life?.die("the window closes.");
  }

  /** @param opening Name of the file that the call opens: a damaged one may keep its reader busy for ever. */
  async #call<T>(ask: (desk: RemoteDesk) => Promise<T>, opening?: string): Promise<T> {
    if (this.#ended) throw new DataError("WorkerError", "The window's desk has been closed.");
    this.#life ??= this.#begin();
    const life = this.#life;
    await Promise.race([life.restored, life.death]);
    if (opening === undefined) return this.#guarded(life, ask(life.remote));
    const stop = this.#watchOpening(life, opening);
    try {
      return await this.#guarded(life, ask(life.remote));
    } finally {
      stop();
    }
  }

  /** While a file is opened the worker must answer within seconds: headers are read in pieces, and none takes long. */
  #watchOpening(life: Life, file: string): () => void {
    const { askEvery, openWithin } = this.#parts;
    let isOpening = true;
    const ask = (): void => {
      if (!isOpening || this.#life !== life) return;
      const late = setTimeout(() => {
        if (isOpening)
          life.die(
            `${file} could not be read within ${openWithin / 1000} s: it is probably damaged. Fetch it again; on a slow disk, copy it to a faster one. The other files stay open.`,
          );
      }, openWithin);
      const answered = (): void => {
        clearTimeout(late);
        setTimeout(ask, askEvery);
      };
      (life.remote.ping() as Promise<boolean>).then(answered, answered);
      life.death.catch(() => clearTimeout(late));
    };
    // Loading the worker itself may take its time: the limit holds from its first answer on.
    (life.remote.ping() as Promise<boolean>).then(ask, () => undefined);
    return () => {
      isOpening = false;
    };
  }

  /** A call's answer, or the worker's death, whichever comes first. */
  async #guarded<T>(life: Life, answer: Promise<T>): Promise<T> {
    // If death wins the race, the answer that never comes must not count as unhandled.
    answer.catch(() => undefined);
    life.pending += 1;
    this.#watch(life);
    try {
      return await Promise.race([answer, life.death]);
    } finally {
      life.pending -= 1;
    }
  }

  #begin(): Life {
    const worker = this.#parts.start();
    let fail: (error: Error) => void = () => undefined;
    const death = new Promise<never>((_, reject) => {
      fail = reject;
    });
    death.catch(() => undefined);
    const life: Life = {
      remote: Comlink.wrap(worker) as unknown as RemoteDesk,
      worker,
      death,
      die: (words) => {
        if (this.#life === life) this.#life = null;
        worker.terminate();
        fail(new DataError("WorkerError", `The desk's worker ended and is started anew: ${words} Try again.`));
      },
      restored: Promise.resolve(),
      pending: 0,
      isWatched: false,
    };
    worker.onerror = (event) => life.die(`${event.message || "it could not be loaded"}.`);
    worker.onmessageerror = () => life.die("a message could not be read.");
    life.restored = this.#restore(life);
    life.restored.catch(() => undefined);
    return life;
  }

  async #restore(life: Life): Promise<void> {
    if (this.#listener !== null)
      await this.#guarded(life, life.remote.onProgress(Comlink.proxy(this.#listener)) as Promise<void>);
    // A file that no longer opens is missed, in words, by whoever asks for it.
    for (const { source, corrections } of this.#files.values())
      await this.#guarded(life, life.remote.open([source], corrections) as Promise<OpenReport>);
  }

  /** While calls are pending, ask now and then whether the worker still answers. */
  #watch(life: Life): void {
    if (life.isWatched) return;
    life.isWatched = true;
    const ask = (): void => {
      if (life.pending === 0 || this.#life !== life) {
        life.isWatched = false;
        return;
      }
      const late = setTimeout(
        () => life.die(`it has not answered for ${Math.round(this.#parts.answerWithin / 1000)} s.`),
        this.#parts.answerWithin,
      );
      const answered = (): void => {
        clearTimeout(late);
        setTimeout(ask, this.#parts.askEvery);
      };
      (life.remote.ping() as Promise<boolean>).then(answered, answered);
      life.death.catch(() => clearTimeout(late));
    };
    setTimeout(ask, this.#parts.askEvery);
  }
}

/** Start the desk worker when the first call comes. */
export function startDesk(parts: DeskClientParts = BROWSER): DeskClient {
  return new RestartingDesk(parts);
}
