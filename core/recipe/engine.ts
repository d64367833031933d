import type { FittedBackground } from "../background/fit.ts";
import { runningMeanHalo } from "../background/running-mean.ts";
import { NO_BACKGROUND } from "../background/spec.ts";
import type { Diagnostic, Outcome } from "../diagnostics/entry.ts";
import { type CancelSignal, isKind, throwIfCancelled } from "../errors.ts";
import type { IndexRange } from "../field/axes.ts";
import type { FieldDescription, FileContents } from "../formats/dataset.ts";
import { BackgroundPasses, passJobs } from "./background-passes.ts";
import { CATALOGUE } from "./catalogue.ts";
import { chunkCuts } from "./chunk-cuts.ts";
import type { ChunkJob, Crew } from "./crew.ts";
import { jobParts } from "./job-run.ts";
import { stackedOutcome } from "./member-outcomes.ts";
import { type RunProgress, WorkMeter } from "./progress.ts";
import type { Provenance, Recipe, Result } from "./recipe.ts";
import { backgroundInUse, type ResultPlan, resultPlan } from "./result-plan.ts";

export interface RunHooks {
  /** "Isohypse 0.1.0", for the provenance. */
  readonly program: string;
  readonly signal?: CancelSignal;
  readonly progress?: (progress: RunProgress) => void;
  /** Takes each result as it is made; results are then not kept, so that memory is bounded by one of them. A throw fails that result. */
  readonly onResult?: (result: Result, seconds: number) => Promise<void>;
  readonly catalogue?: readonly Diagnostic[];
  /** Kept over runs where the same files stay open. */
  readonly passes?: BackgroundPasses;
}

export interface FailedResult {
  readonly id: string;
  readonly words: string;
}

export interface RunReport {
  /** In the order of the recipe; empty if `onResult` took them. */
  readonly results: readonly Result[];
  readonly failed: readonly FailedResult[];
}

function levelsOf({ levelIndices }: ResultPlan): readonly (number | null)[] {
  return levelIndices ?? [null];
}

function workOf(job: ChunkJob): number {
  const { times, rows, series } = job;
  return (times[1] - times[0]) * (rows[1] - rows[0]) * series.grid.lon.length * (series.levels?.length ?? 1);
}

function chunkJobs(
  planned: ResultPlan,
  member: number | null,
  fitted: Readonly<Record<string, FittedBackground>>,
): ChunkJob[] {
  const { diagnostic, options, series, plan, fields, levelIndices } = planned;
  const { rows, halo } = plan;
  const perStep = (rows[1] - rows[0]) * series.grid.lon.length * levelsOf(planned).length;
  const keys = Object.fromEntries(Object.entries(fields).map(([input, field]) => [input, field.key]));
  const reach = halo + (plan.usesBackground ? runningMeanHalo(series.background, series.steps) : 0);
  return chunkCuts(series.times, perStep, reach).map((times) => ({
    diagnostic: diagnostic.id,
    options,
    series,
    fields: keys,
    levelIndices,
    member,
    times,
    rows,
    halo,
    background: backgroundInUse(planned),
    fitted,
  }));
}

/** Rows that all results together need of a field's background, so that one pass serves them all. */
function passRows(field: FieldDescription, plans: readonly ResultPlan[]): IndexRange {
  const using = plans.filter(
    (planned) => planned.plan.usesBackground && Object.values(planned.fields).some((other) => other.key === field.key),
  );
  return [Math.min(...using.map(({ plan }) => plan.rows[0])), Math.max(...using.map(({ plan }) => plan.rows[1]))];
}

function provenance(
  { result, fields, series }: ResultPlan,
  files: readonly FileContents[],
  program: string,
): Provenance {
  return {
    program,
    made: new Date().toISOString(),
    recipe: result,
    background: series.background,
    inputs: Object.values(fields).flatMap((field) =>
      (field.parts ?? [field]).map(({ file, variable }) => ({
        file,
        bytes: files.find((other) => other.file === file)?.bytes ?? 0,
        variable,
        quantity: field.quantity,
        why: field.why,
      })),
    ),
  };
}

function words(error: unknown): string {
  return error instanceof Error ? error.message : String(error);
}

/**
 * Run a recipe on open files, chunk by chunk, on a crew of workers.
 *
 * The numbers do not depend on the crew's size: cuts follow from the grid, and parts are joined in the order of time. A
 * result that fails says why and leaves the others alone.
 *
 * @param files What the crew's workers have open.
 * @throws Cancelled. Everything else is told in `failed`.
 */
export async function runRecipe(
  recipe: Recipe,
  files: readonly FileContents[],
  crew: Crew,
  hooks: RunHooks,
): Promise<RunReport> {
  const { signal, onResult, catalogue = CATALOGUE, passes = new BackgroundPasses() } = hooks;
  const background = recipe.background ?? NO_BACKGROUND;
  const meter = new WorkMeter(hooks.progress);
  const onDone = (job: ChunkJob): void => meter.add(workOf(job));
  const plans: ResultPlan[] = [];
  const failures = new Map<string, string>();
  recipe.results.forEach((result, i) => {
    try {
      plans.push(resultPlan(result, `results[${i}]`, background, files, catalogue));
    } catch (error) {
      failures.set(result.id, words(error));
    }
  });

  // What is planned is what will be read: the chunks of each result, and each background once.
  const seen = new Set<string>();
  for (const planned of plans)
    for (const member of planned.members) {
      for (const job of chunkJobs(planned, member, {})) meter.plan(workOf(job));
      for (const field of Object.values(planned.fields))
        for (const level of levelsOf(planned)) {
          const key = `${field.key} ${member} ${level}`;
          if (!planned.plan.usesBackground || seen.has(key)) continue;
          seen.add(key);
          const rows = passRows(field, plans);
          if (passes.held({ field, member }, level, rows, background) !== null) continue;
          for (const job of passJobs({ field, member }, level, rows, background)) meter.plan(workOf(job));
        }
    }

  async function memberOutcome(planned: ResultPlan, member: number | null): Promise<Outcome> {
    const { diagnostic, series, options, plan, fields } = planned;
    const fitted: Record<string, FittedBackground> = {};
    if (plan.usesBackground)
      for (const [input, field] of Object.entries(fields)) {
        const rows = passRows(field, plans);
        const levels = levelsOf(planned);
        const of = { field, member };
        const fit = await passes.fitted(of, levels, plan.rows, rows, background, crew, signal, onDone);
        if (fit !== null) fitted[input] = fit;
      }
    const parts = await jobParts(chunkJobs(planned, member, fitted), crew, signal, onDone);
    return diagnostic.finish(parts, series, options);
  }

  async function made(planned: ResultPlan): Promise<Result> {
    const { diagnostic, options, result, notes, members } = planned;
    meter.title = `${result.id}: ${diagnostic.title}`;
    const outcomes: Outcome[] = [];
    for (const member of members) outcomes.push(await memberOutcome(planned, member));
    const outcome = stackedOutcome(outcomes, members, Object.keys(diagnostic.tables ?? {}));
    return {
      ...outcome,
      notes: [...notes, ...outcome.notes],
      id: result.id,
      diagnostic: diagnostic.id,
      title: diagnostic.title,
      options,
      provenance: provenance(planned, files, hooks.program),
    };
  }

  const results: Result[] = [];
  for (const planned of plans) {
    const started = Date.now();
    try {
      throwIfCancelled(signal);
      const result = await made(planned);
      if (onResult === undefined) results.push(result);
      else await onResult(result, (Date.now() - started) / 1000);
    } catch (error) {
      if (isKind(error, "Cancelled")) throw error;
      failures.set(planned.result.id, words(error));
    }
  }
  const failed = recipe.results.flatMap(({ id }) => {
    const why = failures.get(id);
    return why === undefined ? [] : [{ id, words: why }];
  });
  return { results, failed };
}
