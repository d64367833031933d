import { openBatchFile } from "../../app/batch/batch-file.ts";
import type { OpenFile } from "../../core/formats/dataset.ts";

/** Enough that the compiler has seen each loop before the median round. */
const ROUNDS = 15;
const BLOCK = 16; // steps at a time, as the other side

/** Read everything once. @returns Points read. */
async function readAll(file: OpenFile): Promise<number> {
  let points = 0;
  for (const field of file.contents.fields)
    for (let member = 0; member < (field.members?.length ?? 1); member++) {
      let into: Float64Array | undefined;
      for (let from = 0; from < field.steps.values.length; from += BLOCK) {
        const to = Math.min(field.steps.values.length, from + BLOCK);
        const slab = await file.read(field.key, { times: [from, to], member, into });
        into = slab.data;
        points += slab.data.length;
      }
    }
  return points;
}

const found: Record<string, { seconds: number; points: number }> = {};
for (const path of process.argv.slice(2)) {
  const seconds: number[] = [];
  let points = 0;
  for (let round = 0; round < ROUNDS; round++) {
    const start = performance.now();
    const file = await openBatchFile({ path, corrections: [] });
    points = await readAll(file);
    await file.close();
    seconds.push((performance.now() - start) / 1000);
  }
  seconds.sort((a, b) => a - b);
  found[path.split("/").pop() ?? path] = { seconds: seconds[Math.floor(ROUNDS / 2)] as number, points };
}
console.log(JSON.stringify(found));
