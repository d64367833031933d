import { backgroundPart } from "../background/background.ts";
import type { ChunkPart, Diagnostic } from "../diagnostics/entry.ts";
import type { Slab } from "../field/slab.ts";
import type { OpenRecords } from "../formats/record/open-records.ts";
import { diagnosticOf } from "./catalogue.ts";
import type { ChunkJob } from "./crew.ts";
import { slabWithBackground, widened } from "./slab-background.ts";

/** Slabs of the chunk before, by input: their memory serves the next, for most chunks are of one size. */
export type SlabMemory = Map<string, Float64Array>;

/**
 * Do one chunk: read its slabs with the halo, make the backgrounds on them, and compute.
 *
 * @param memory Kept by the caller from chunk to chunk.
 * @throws What reading or computing throws.
 */
export async function chunkOf(
  open: OpenRecords,
  job: ChunkJob,
  catalogue: readonly Diagnostic[],
  memory: SlabMemory = new Map(),
): Promise<ChunkPart> {
  const { series, times, rows, levelIndices, member } = job;
  if (job.diagnostic === "background") {
    const read = open.reader(open.field(job.fields.field), member);
    const slab = await read({
      times,
      rows,
      ...(levelIndices === null ? {} : { levels: levelIndices }),
    });
    return backgroundPart(job.background, slab, series.steps, times);
  }
  const diagnostic = diagnosticOf(job.diagnostic, catalogue);
  const loaded = widened(times, job.halo, series.steps.values.length);
  const slabs: Record<string, Slab> = {};
  const backgrounds: Record<string, Float64Array> = {};
  for (const [input, key] of Object.entries(job.fields)) {
    const field = open.field(key);
    const request = { times: loaded, levels: levelIndices, rows, into: memory.get(input) };
    const { slab, background } = await slabWithBackground(
      open.reader(field, member),
      field,
      request,
      job.background,
      job.fitted[input],
    );
    slabs[input] = slab;
    if (background !== null) backgrounds[input] = background;
  }
  const part = diagnostic.chunk({ slabs, backgrounds, times, loaded }, series, job.options);
  const leaving = new Set(Object.values(part).map((array) => array.buffer));
  memory.clear();
  // A slab that went into the part is on its way to another thread.
  for (const [input, { data }] of Object.entries(slabs))
    if (!leaving.has(data.buffer as ArrayBuffer)) memory.set(input, data);
  return part;
}
