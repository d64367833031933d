import { access, constants, mkdir, readFile } from "node:fs/promises";
import { basename, join } from "node:path";
import { NO_BACKGROUND } from "../../core/background/spec.ts";
import type { OptionValues } from "../../core/diagnostics/entry.ts";
import { isKind } from "../../core/errors.ts";
import type { Correction, OpenFile } from "../../core/formats/dataset.ts";
import { CATALOGUE } from "../../core/recipe/catalogue.ts";
import type { Crew } from "../../core/recipe/crew.ts";
import { type FailedResult, runRecipe } from "../../core/recipe/engine.ts";
import { OwnThreadCrew } from "../../core/recipe/own-thread-crew.ts";
import { readRecipe } from "../../core/recipe/read-recipe.ts";
import type { Recipe } from "../../core/recipe/recipe.ts";
import { WorkerCrew } from "../../core/recipe/worker-crew.ts";
import type { BatchTask } from "./arguments.ts";
import { openBatchFile } from "./batch-file.ts";
import type { BatchIo } from "./command.ts";
import { reason } from "./file-reason.ts";
import { type InputRecord, inputRecord } from "./input-hash.ts";
import { ProgressLine } from "./progress-line.ts";
import { writeResult } from "./result-writer.ts";
import { threadStarter } from "./thread-crew.ts";
import { PROGRAM } from "./version.ts";
import { wholeFiles } from "./whole-files.ts";

const MOST_WORKERS = 4; // by default: beyond that the disk is the limit, and memory grows with each
const SMALL_BYTES = 8 << 20; // of all files together: read sooner than a thread starts

interface DoneResult {
  readonly id: string;
  readonly diagnostic: string;
  readonly options: OptionValues;
  readonly notes: readonly string[];
  readonly seconds: number;
  readonly files: readonly string[];
}

/** @throws Error in words. */
async function recipeText(path: string): Promise<string> {
  return readFile(path, "utf8").catch((error: NodeJS.ErrnoException) => {
    throw new Error(`${path}: the recipe cannot be read: ${reason(error)}.`);
  });
}

/** @throws Error in words if the folder cannot be made or written. */
async function outFolder(path: string): Promise<void> {
  try {
    await mkdir(path, { recursive: true });
    await access(path, constants.W_OK | constants.X_OK);
  } catch (error) {
    throw new Error(`${path}: nothing can be written there: ${reason(error)}.`);
  }
}

/** @throws Error in words naming the first file that does not open; those before it are closed again. */
export async function openFiles(paths: readonly string[], corrections: readonly Correction[]): Promise<OpenFile[]> {
  const files: OpenFile[] = [];
  try {
    const names = paths.map((path) => basename(path));
    const twice = names.find((name, i) => names.indexOf(name) !== i);
    if (twice !== undefined)
      throw new Error(`${twice} is named twice; fields are told apart by file name, so each must have its own.`);
    for (const path of paths) files.push(await openBatchFile({ path, corrections }));
    return files;
  } catch (error) {
    await closeAll(files);
    throw error;
  }
}

export async function closeAll(files: readonly OpenFile[]): Promise<void> {
  for (const file of files) await file.close().catch(() => undefined);
}

async function settledInputs(
  inputs: Promise<InputRecord[]>,
  paths: readonly string[],
): Promise<{ records: InputRecord[]; changed: string[] }> {
  const records = await inputs;
  const now = await Promise.all(paths.map((path) => inputRecord(path, false, AbortSignal.abort()).catch(() => null)));
  const changed = paths.filter((_, i) => {
    const after = now[i];
    return after === null || after.bytes !== records[i].bytes || after.modified !== records[i].modified;
  });
  return { records, changed };
}

/**
 * Run a recipe from the command line.
 *
 * @returns Exit code: 0 done, 1 a result failed, 130 stopped.
 * @throws Error in words when nothing could be run (exit code 2).
 */
export async function runFromCommand(task: Extract<BatchTask, { kind: "run" }>, io: BatchIo): Promise<number> {
  const started = new Date();
  let recipe: Recipe;
  try {
    recipe = readRecipe(await recipeText(task.recipe), CATALOGUE);
  } catch (error) {
    if (!isKind(error, "RecipeError")) throw error;
    throw new Error((error as Error).message.replaceAll(/^/gm, `${task.recipe}: `));
  }
  const corrections = recipe.corrections ?? [];
  const open = await openFiles(task.files, corrections);
  const stopped = new AbortController();
  const inputs = Promise.all(
    task.files.map((path) => inputRecord(path, task.hash, AbortSignal.any([io.signal, stopped.signal]))),
  );
  inputs.catch(() => undefined);
  const workers = task.workers ?? Math.min(io.cores, MOST_WORKERS);
  const bytes = open.reduce((sum, file) => sum + file.contents.bytes, 0);
  const threads =
    workers === 1 || bytes < SMALL_BYTES
      ? null
      : new WorkerCrew(
          workers,
          threadStarter(io.workerUrl),
          task.files.map((path, id) => ({ id, source: { path, corrections } })),
        );
  const crew: Crew = threads ?? new OwnThreadCrew(open, CATALOGUE);
  const line = new ProgressLine(io.stderr);
  const done: DoneResult[] = [];
  let failed: readonly FailedResult[] = [];
  let isStopped = false;
  try {
    await outFolder(task.out);
    const report = await runRecipe(
      recipe,
      open.map((file) => file.contents),
      crew,
      {
        program: PROGRAM,
        signal: io.signal,
        ...(io.showsProgress ? { progress: (progress) => line.show(progress) } : {}),
        async onResult(result, seconds) {
          const written = await writeResult(result, task.out).catch((error: unknown) => {
            throw new Error(`it could not be written: ${reason(error)}`);
          });
          line.clear();
          for (const note of written.notes) io.stdout(`${result.id}: ${note}\n`);
          io.stdout(`${result.id}: ${written.files.join(", ")} (${seconds.toFixed(1)} s)\n`);
          const { id, diagnostic, options, notes } = result;
          done.push({ id, diagnostic, options, notes: [...notes, ...written.notes], seconds, files: written.files });
        },
      },
    );
    failed = report.failed;
  } catch (error) {
    if (!isKind(error, "Cancelled")) {
      stopped.abort();
      throw error;
    }
    isStopped = true;
    failed = recipe.results
      .filter(({ id }) => !done.some((result) => result.id === id))
      .map(({ id }) => ({ id, words: "stopped before it was done" }));
  } finally {
    line.clear();
    threads?.end();
    await closeAll(open);
  }
  for (const { id, words } of failed) io.stderr(`${id} failed: ${words}\n`);
  const { records, changed } = await settledInputs(inputs, task.files);
  for (const path of changed) io.stderr(`${path} changed while it was read: do not trust this run.\n`);
  const record = {
    isohypse: 1,
    program: PROGRAM,
    runtime: `Node.js ${process.version}, ${process.platform} ${process.arch}`,
    started: started.toISOString(),
    seconds: (Date.now() - started.getTime()) / 1000,
    workers: threads === null ? 1 : workers,
    recipe,
    background: recipe.background ?? NO_BACKGROUND,
    inputs: records,
    changedWhileRead: changed,
    stopped: isStopped,
    results: done,
    failed,
  };
  const path = join(task.out, "run.json");
  await wholeFiles((files) =>
    files.write(path, async (file) => {
      await file.writeFile(`${JSON.stringify(record, null, 2)}\n`);
    }),
  ).catch((error: unknown) => {
    throw new Error(`${path}: it could not be written: ${reason(error)}.`);
  });
  if (isStopped) return 130;
  return failed.length > 0 || changed.length > 0 ? 1 : 0;
}
