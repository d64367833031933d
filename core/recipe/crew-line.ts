import type { FittedBackground } from "../background/fit.ts";
import type { ChunkPart } from "../diagnostics/entry.ts";
import type { ChunkJob } from "./crew.ts";

/** A file as a worker opens it. `source` is whatever the runtime's opener takes: a path, a File, a range of a URL. */
export interface CrewFile<Source> {
  /** New for every opening, so that a file opened anew under other corrections is another one. */
  readonly id: number;
  readonly source: Source;
}

/** A job on its way: backgrounds are large and stay the same over many chunks, so each is sent once and named by number. */
export interface SentJob extends Omit<ChunkJob, "fitted"> {
  readonly fitted: Readonly<Record<string, number>>;
}

export type ToWorker<Source> =
  /** The files to hold open from now on. */
  | { readonly kind: "files"; readonly files: readonly CrewFile<Source>[] }
  | {
      readonly kind: "job";
      readonly number: number;
      readonly job: SentJob;
      /** Backgrounds that the worker does not hold yet. */
      readonly backgrounds: readonly (readonly [number, FittedBackground])[];
      /** Backgrounds that it may drop. */
      readonly forget: readonly number[];
    };

export type FromWorker =
  | { readonly kind: "done"; readonly number: number; readonly part: ChunkPart }
  | { readonly kind: "failed"; readonly number: number; readonly name: string; readonly words: string };

/** Our end of the line to one worker, whatever kind of worker the runtime has. */
export interface WorkerLine<Source> {
  post(message: ToWorker<Source>): void;
  /** Stop the worker; no event follows. */
  end(): void;
}

export interface WorkerEvents {
  message(message: FromWorker): void;
  /** The worker is gone or never came up. Called at most once; no message follows. */
  died(words: string): void;
}

export type StartWorker<Source> = (events: WorkerEvents) => WorkerLine<Source>;
