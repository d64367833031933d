import type { FittedBackground } from "../background/fit.ts";
import type { ChunkPart } from "../diagnostics/entry.ts";
import { type CancelSignal, DataError, type ErrorKind, throwIfCancelled } from "../errors.ts";
import type { ChunkJob, Crew } from "./crew.ts";
import type { CrewFile, FromWorker, StartWorker, WorkerLine } from "./crew-line.ts";

const BACKGROUNDS_HELD = 4; // by each worker; more would be memory that the chunk does not bound

interface Waiting {
  readonly job: ChunkJob;
  readonly signal: CancelSignal | undefined;
  resolve(part: ChunkPart): void;
  reject(error: Error): void;
}

interface Member<Source> {
  readonly line: WorkerLine<Source>;
  /** What it works on; null while it rests. */
  current: { readonly number: number; readonly waiting: Waiting } | null;
  /** Numbers of the backgrounds it holds, the latest used last. */
  held: number[];
}

/**
 * A crew of workers, started when there is work for them. This alone owns their lives: a worker that dies fails its job in
 * words and is replaced when the next job comes, with the same files opened again.
 */
export class WorkerCrew<Source> implements Crew {
  readonly size: number;
  readonly #start: StartWorker<Source>;
  readonly #members = new Set<Member<Source>>();
  readonly #queue: Waiting[] = [];
  readonly #numbers = new WeakMap<FittedBackground, number>();
  #files: readonly CrewFile<Source>[];
  #counter = 0;
  #ended = false;

  constructor(size: number, start: StartWorker<Source>, files: readonly CrewFile<Source>[] = []) {
    this.size = size;
    this.#start = start;
    this.#files = files;
  }

  /** Have these files open from the next job on. */
  setFiles(files: readonly CrewFile<Source>[]): void {
    this.#files = files;
    for (const member of this.#members) member.line.post({ kind: "files", files });
  }

  run(job: ChunkJob, signal?: CancelSignal): Promise<ChunkPart> {
    if (this.#ended) return Promise.reject(new DataError("Cancelled", "The workers have been stopped."));
    return new Promise((resolve, reject) => {
      this.#queue.push({ job, signal, resolve, reject });
      this.#assign();
    });
  }

  /** Stop all workers; what is still waiting fails as cancelled. */
  end(): void {
    this.#ended = true;
    const stopped = new DataError("Cancelled", "The workers have been stopped.");
    for (const waiting of this.#queue.splice(0)) waiting.reject(stopped);
    for (const member of this.#members) {
      member.line.end();
      member.current?.waiting.reject(stopped);
    }
    this.#members.clear();
  }

  #assign(): void {
    while (this.#queue.length > 0) {
      const resting = [...this.#members].find((member) => member.current === null);
      if (resting === undefined && this.#members.size >= this.size) return;
      const waiting = this.#queue.shift();
      if (waiting === undefined) return;
      try {
        throwIfCancelled(waiting.signal);
        this.#send(resting ?? this.#hire(), waiting);
      } catch (error) {
        waiting.reject(error as Error);
      }
    }
  }

  #hire(): Member<Source> {
    // `died` may come before the line exists: a worker that cannot even be started.
    let member: Member<Source> | null = null;
    let early: string | null = null;
    const line = this.#start({
      message: (message) => member !== null && this.#receive(member, message),
      died: (words) => {
        if (member === null) early = words;
        else this.#bury(member, words);
      },
    });
    if (early !== null) throw new DataError("WorkerError", `A worker could not be started: ${early}`);
    member = { line, current: null, held: [] };
    this.#members.add(member);
    line.post({ kind: "files", files: this.#files });
    return member;
  }

  #send(member: Member<Source>, waiting: Waiting): void {
    const { fitted, ...rest } = waiting.job;
    const numbers: Record<string, number> = {};
    const fresh: [number, FittedBackground][] = [];
    for (const [input, background] of Object.entries(fitted)) {
      let number = this.#numbers.get(background);
      if (number === undefined) {
        number = ++this.#counter;
        this.#numbers.set(background, number);
      }
      numbers[input] = number;
      if (!member.held.includes(number)) fresh.push([number, background]);
      member.held = [...member.held.filter((held) => held !== number), number];
    }
    const keep = Math.max(BACKGROUNDS_HELD, Object.keys(fitted).length);
    const forget = member.held.slice(0, Math.max(0, member.held.length - keep));
    member.held = member.held.slice(forget.length);
    const number = ++this.#counter;
    member.current = { number, waiting };
    try {
      member.line.post({ kind: "job", number, job: { ...rest, fitted: numbers }, backgrounds: fresh, forget });
    } catch (error) {
      // What cannot be sent fails its own job; the worker never saw it and stays free.
      member.current = null;
      member.held = [];
      throw error;
    }
  }

  #receive(member: Member<Source>, message: FromWorker): void {
    const { current } = member;
    if (current === null || current.number !== message.number) return;
    member.current = null;
    if (message.kind === "done") current.waiting.resolve(message.part);
    else current.waiting.reject(new DataError(message.name as ErrorKind, message.words));
    this.#assign();
  }

  #bury(member: Member<Source>, words: string): void {
    if (!this.#members.delete(member)) return;
    member.current?.waiting.reject(
      new DataError("WorkerError", `A worker died in the middle of its work and was replaced: ${words}`),
    );
    member.current = null;
    this.#assign();
  }
}
