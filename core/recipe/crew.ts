import type { FittedBackground } from "../background/fit.ts";
import type { BackgroundSpec } from "../background/spec.ts";
import type { ChunkPart, OptionValues, Series } from "../diagnostics/entry.ts";
import type { CancelSignal } from "../errors.ts";
import type { IndexRange } from "../field/axes.ts";

/** One chunk of work, as plain data: everything that a worker needs besides its open files. */
export interface ChunkJob {
  /** Catalogue id, or "background" for the pass that fits a background. */
  readonly diagnostic: string;
  readonly options: OptionValues;
  readonly series: Series;
  /** Field key by input name. */
  readonly fields: Readonly<Record<string, string>>;
  /** Indices of the selected levels in each field, absent for a field without levels. */
  readonly levelIndices: readonly number[] | null;
  /** Number of the member; null on fields without members. */
  readonly member: number | null;
  readonly times: IndexRange;
  /** Rows to read. */
  readonly rows: IndexRange;
  /** Steps that the diagnostic wants beyond its own on either side. */
  readonly halo: number;
  /** `none` where the diagnostic wants none. */
  readonly background: BackgroundSpec;
  /** By input name; absent where none is wanted, or where the background is made from the halo (running mean). */
  readonly fitted: Readonly<Record<string, FittedBackground>>;
}

/** Workers that have the case's files open. In the window Web Workers, in batch worker_threads, in tests the caller's own thread. */
export interface Crew {
  /** How many jobs run at once. */
  readonly size: number;
  /**
   * Run one job on a free worker.
   *
   * @throws WorkerError if the worker died (it has been replaced by then); Cancelled; whatever the job threw.
   */
  run(job: ChunkJob, signal?: CancelSignal): Promise<ChunkPart>;
}
