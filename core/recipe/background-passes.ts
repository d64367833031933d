import { backgroundTimes, fitBackground, needsPass } from "../background/background.ts";
import type { FittedBackground } from "../background/fit.ts";
import type { BackgroundSpec } from "../background/spec.ts";
import type { Series } from "../diagnostics/entry.ts";
import type { CancelSignal } from "../errors.ts";
import type { IndexRange } from "../field/axes.ts";
import { type FieldDescription, filesOf } from "../formats/dataset.ts";
import { chunkCuts } from "./chunk-cuts.ts";
import type { ChunkJob, Crew } from "./crew.ts";
import { jobParts } from "./job-run.ts";

/** Index of the level, or null on a field without levels. */
type LevelIndex = number | null;

/** One member of a field; `member` is its number, null on a field without members. */
export interface MemberField {
  readonly field: FieldDescription;
  readonly member: number | null;
}

interface Pass {
  /** Files that it was made from. */
  readonly files: readonly string[];
  readonly rows: IndexRange;
  readonly fitted: FittedBackground;
}

function seriesOf(field: FieldDescription, level: LevelIndex, spec: BackgroundSpec): Series {
  return {
    grid: field.grid,
    steps: field.steps,
    times: [0, field.steps.values.length],
    levels: level === null ? null : Float64Array.of(field.levels?.[level] ?? Number.NaN),
    quantity: field.quantity,
    units: field.units,
    background: spec,
  };
}

/** The jobs of one pass over the record. Cut by whole fields, so that a row's background does not depend on which rows are wanted. */
export function passJobs(
  { field, member }: MemberField,
  level: LevelIndex,
  rows: IndexRange,
  spec: BackgroundSpec,
): ChunkJob[] {
  if (!needsPass(spec)) return [];
  const { grid, steps } = field;
  return chunkCuts(backgroundTimes(spec, steps), grid.lat.length * grid.lon.length, 0).map((times) => ({
    diagnostic: "background",
    options: {},
    series: seriesOf(field, level, spec),
    fields: { field: field.key },
    levelIndices: level === null ? null : [level],
    member,
    times,
    rows,
    halo: 0,
    background: spec,
    fitted: {},
  }));
}

/** Rows [from, to) of a fitted background, and several levels in one. */
function assembled(fits: readonly FittedBackground[], rows: IndexRange, nLon: number): FittedBackground {
  const [first] = fits;
  if (fits.length === 1 && first.rows[0] === rows[0] && first.rows[1] === rows[1]) return first;
  const plane = (rows[1] - rows[0]) * nLon;
  const coefficients = new Float64Array(first.nCoefficients * fits.length * plane);
  for (let i = 0; i < first.nCoefficients; i++)
    fits.forEach((fit, level) => {
      const own = (fit.rows[1] - fit.rows[0]) * nLon;
      const start = i * own + (rows[0] - fit.rows[0]) * nLon;
      coefficients.set(fit.coefficients.subarray(start, start + plane), (i * fits.length + level) * plane);
    });
  return { ...first, coefficients, rows };
}

/** Backgrounds already fitted. Level by level, so that what is fitted does not depend on which levels are asked for together. */
export class BackgroundPasses {
  readonly #passes = new Map<string, Pass>();

  #key({ field, member }: MemberField, level: LevelIndex, spec: BackgroundSpec): string {
    return JSON.stringify([field.key, member, level, spec]);
  }

  #covering(of: MemberField, level: LevelIndex, rows: IndexRange, spec: BackgroundSpec): Pass | null {
    if (!needsPass(spec)) return null;
    const pass = this.#passes.get(this.#key(of, level, spec));
    return pass !== undefined && pass.rows[0] <= rows[0] && pass.rows[1] >= rows[1] ? pass : null;
  }

  /** The background of one level if it has been fitted, else null. */
  held(of: MemberField, level: LevelIndex, rows: IndexRange, spec: BackgroundSpec): FittedBackground | null {
    const pass = this.#covering(of, level, rows, spec);
    return pass === null ? null : assembled([pass.fitted], rows, of.field.grid.lon.length);
  }

  /** Forget the backgrounds of a file that was closed or is now read otherwise. */
  forget(file: string): void {
    for (const [key, { files }] of this.#passes) if (files.includes(file)) this.#passes.delete(key);
  }

  /**
   * The background of a field on some rows, fitted by a pass over the record unless that has been done.
   *
   * @param levels Indices of the levels wanted; [null] on a field without levels.
   * @param passRows Rows to fit if a pass is needed, at least `rows`; more serve later results.
   * @returns null where the background needs no pass.
   * @throws What a job threw; Cancelled.
   */
  async fitted(
    of: MemberField,
    levels: readonly LevelIndex[],
    rows: IndexRange,
    passRows: IndexRange,
    spec: BackgroundSpec,
    crew: Crew,
    signal: CancelSignal | undefined,
    onDone: (job: ChunkJob) => void,
  ): Promise<FittedBackground | null> {
    if (!needsPass(spec)) return null;
    const { field } = of;
    const fits: FittedBackground[] = [];
    for (const level of levels) {
      let pass = this.#covering(of, level, rows, spec);
      if (pass === null) {
        const jobs = passJobs(of, level, passRows, spec);
        const parts = await jobParts(jobs, crew, signal, onDone);
        pass = {
          files: filesOf(field),
          rows: passRows,
          fitted: fitBackground(parts, seriesOf(field, level, spec), passRows),
        };
        // A pass over more rows may have ended in the meantime; it serves more.
        if (this.#covering(of, level, passRows, spec) === null) this.#passes.set(this.#key(of, level, spec), pass);
      }
      fits.push(pass.fitted);
    }
    return assembled(fits, rows, field.grid.lon.length);
  }
}
