import { openBatchFile } from "../../app/batch/batch-file.ts";

// Twice: the second opening finds what the first one kept.
const path = process.argv[2] as string;
for (let round = 0; round < 2; round++) {
  const before = process.memoryUsage().rss;
  const start = performance.now();
  const file = await openBatchFile({ path, corrections: [] });
  const open = performance.now() - start;
  const [field] = file.contents.fields;
  if (field === undefined) throw new Error(`${path} holds no field: ${JSON.stringify(file.contents.leftOut)}`);
  const steps = field.steps.values.length;
  let slowest = 0;
  for (let i = 0; i < 40; i++) {
    const step = Math.floor(((i * 7919) % 40) * ((steps - 1) / 39));
    const began = performance.now();
    await file.read(field.key, { times: [step, step + 1] });
    slowest = Math.max(slowest, performance.now() - began);
  }
  const grown = (process.memoryUsage().rss - before) / 2 ** 20;
  console.log(JSON.stringify({ steps, open, slowest, grown }));
  await file.close();
}
