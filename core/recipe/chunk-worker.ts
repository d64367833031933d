import { backgroundPart } from "../background/background.ts";
import type { ChunkPart, Diagnostic } from "../diagnostics/entry.ts";
import { DataError } from "../errors.ts";
import type { Slab } from "../field/slab.ts";
import type { FieldDescription, OpenFile } from "../formats/dataset.ts";
import { diagnosticOf } from "./catalogue.ts";
import type { ChunkJob } from "./crew.ts";
import { slabWithBackground, widened } from "./slab-background.ts";

function fileOf(files: readonly OpenFile[], key: string): { file: OpenFile; field: FieldDescription } {
  for (const file of files) {
    const field = file.contents.fields.find((candidate) => candidate.key === key);
    if (field !== undefined) return { file, field };
  }
  throw new DataError("NotFoundError", `${key} is not open here. Open its file again.`);
}

/**
 * Do one chunk: read its slabs with the halo, make the backgrounds on them, and compute.
 *
 * @throws What reading or computing throws.
 */
export async function chunkOf(
  files: readonly OpenFile[],
  job: ChunkJob,
  catalogue: readonly Diagnostic[],
): Promise<ChunkPart> {
  const { series, times, rows, levelIndices } = job;
  if (job.diagnostic === "background") {
    const { file, field } = fileOf(files, job.fields.field);
    const slab = await file.read(field.key, {
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
    const { file, field } = fileOf(files, key);
    const request = { times: loaded, levels: levelIndices, rows };
    const { slab, background } = await slabWithBackground(file, field, request, job.background, job.fitted[input]);
    slabs[input] = slab;
    if (background !== null) backgrounds[input] = background;
  }
  return diagnostic.chunk({ slabs, backgrounds, times, loaded }, series, job.options);
}
