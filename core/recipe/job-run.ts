import type { ChunkPart } from "../diagnostics/entry.ts";
import { type CancelSignal, throwIfCancelled } from "../errors.ts";
import type { ChunkJob, Crew } from "./crew.ts";

/**
 * Run jobs on a crew, as many at once as it has workers.
 *
 * @param onDone Called after each job.
 * @returns Parts in the order of the jobs, whatever the order in which they came.
 * @throws What the earliest failing job threw, once the jobs under way have ended; Cancelled.
 */
export async function jobParts(
  jobs: readonly ChunkJob[],
  crew: Crew,
  signal: CancelSignal | undefined,
  onDone: (job: ChunkJob) => void,
): Promise<ChunkPart[]> {
  const parts = new Array<ChunkPart>(jobs.length);
  const failures = new Map<number, unknown>();
  let next = 0;
  async function lane(): Promise<void> {
    while (next < jobs.length && failures.size === 0 && signal?.aborted !== true) {
      const i = next;
      next += 1;
      try {
        parts[i] = await crew.run(jobs[i], signal);
        onDone(jobs[i]);
      } catch (error) {
        failures.set(i, error);
      }
    }
  }
  await Promise.all(Array.from({ length: Math.min(crew.size, jobs.length) }, lane));
  throwIfCancelled(signal);
  if (failures.size > 0) throw failures.get(Math.min(...failures.keys()));
  return parts;
}
