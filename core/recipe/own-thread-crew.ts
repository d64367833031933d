import type { ChunkPart, Diagnostic } from "../diagnostics/entry.ts";
import { type CancelSignal, throwIfCancelled } from "../errors.ts";
import type { OpenFile } from "../formats/dataset.ts";
import { OpenRecords } from "../formats/record/open-records.ts";
import { chunkOf } from "./chunk-worker.ts";
import type { ChunkJob, Crew } from "./crew.ts";

/** A crew of one: the caller's own thread, for work that is done sooner than a worker starts. */
export class OwnThreadCrew implements Crew {
  readonly size = 1;
  readonly #open: OpenRecords;
  readonly #catalogue: readonly Diagnostic[];

  constructor(files: readonly OpenFile[], catalogue: readonly Diagnostic[]) {
    this.#open = new OpenRecords(files);
    this.#catalogue = catalogue;
  }

  async run(job: ChunkJob, signal?: CancelSignal): Promise<ChunkPart> {
    throwIfCancelled(signal);
    return chunkOf(this.#open, job, this.#catalogue);
  }
}
