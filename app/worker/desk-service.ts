import type { FittedBackground } from "../../core/background/fit.ts";
import type { BackgroundSpec } from "../../core/background/spec.ts";
import { DataError } from "../../core/errors.ts";
import type { IndexRange } from "../../core/field/axes.ts";
import type { Correction, FieldDescription, FieldReader, FileContents, OpenFile } from "../../core/formats/dataset.ts";
import type { OpenHooks } from "../../core/formats/open-file.ts";
import { OpenRecords } from "../../core/formats/record/open-records.ts";
import { BackgroundPasses, passJobs } from "../../core/recipe/background-passes.ts";
import type { Crew } from "../../core/recipe/crew.ts";
import type { CrewFile } from "../../core/recipe/crew-line.ts";
import { runRecipe } from "../../core/recipe/engine.ts";
import { checkedRecipe } from "../../core/recipe/read-recipe.ts";
import type { Recipe } from "../../core/recipe/recipe.ts";
import { slabWithBackground } from "../../core/recipe/slab-background.ts";
import type {
  Desk,
  FieldPlace,
  Frame,
  OpenReport,
  Refusal,
  Ribbon,
  RunOutcome,
  SourceDescription,
  TaskProgress,
} from "./desk.ts";
import { FrameCache } from "./frame-cache.ts";
import { bandRibbon } from "./ribbon.ts";
import { type Task, Tasks } from "./tasks.ts";

/** What a worker needs to open a file. */
export interface DeskFile {
  readonly source: SourceDescription;
  readonly corrections: readonly Correction[];
}

export interface DeskParts {
  readonly open: (file: DeskFile, hooks?: OpenHooks) => Promise<OpenFile>;
  /** Workers that open the same files for themselves. */
  readonly crew: Crew & { setFiles(files: readonly CrewFile<DeskFile>[]): void };
  readonly program: string;
}

interface Held {
  readonly id: number;
  readonly source: SourceDescription;
  readonly file: OpenFile;
  readonly corrections: readonly Correction[];
}

function sourceName(source: SourceDescription): string {
  if (source.kind === "file") return source.file.name;
  return source.kind === "range" ? source.name : source.path;
}

/** The desk itself, free of any worker's messages: files, frames, ribbons and recipes. */
export class DeskService implements Desk {
  readonly #parts: DeskParts;
  readonly #held = new Map<string, Held>();
  readonly #frames = new FrameCache();
  readonly #tasks = new Tasks();
  #passes = new BackgroundPasses();
  #open = new OpenRecords([]);
  #counter = 0;
  #openings = 0;

  constructor(parts: DeskParts) {
    this.#parts = parts;
  }

  async open(sources: readonly SourceDescription[], corrections: readonly Correction[]): Promise<OpenReport> {
    const opened: FileContents[] = [];
    const refused: Refusal[] = [];
    for (const source of sources) {
      try {
        opened.push(await this.#hold(source, corrections));
      } catch (error) {
        refused.push({ file: sourceName(source), words: error instanceof Error ? error.message : String(error) });
      }
    }
    this.#tellCrew();
    return { opened, refused };
  }

  async correct(file: string, corrections: readonly Correction[]): Promise<FileContents> {
    const contents = await this.#hold(this.#heldFile(file).source, corrections);
    this.#tellCrew();
    return contents;
  }

  async close(file: string): Promise<void> {
    const held = this.#held.get(file);
    if (held === undefined) return;
    this.#held.delete(file);
    this.#forget(file);
    this.#tellCrew();
    await held.file.close();
  }

  prepareBackground(place: FieldPlace, background: BackgroundSpec, task: number): Promise<void> {
    return this.#tasks.run(task, async (running) => {
      await this.#fitted(place, background, running);
    });
  }

  async frame(place: FieldPlace, time: number, background: BackgroundSpec): Promise<Frame> {
    const { read, field } = this.#place(place);
    if (!(Number.isInteger(time) && time >= 0 && time < field.steps.values.length))
      throw new DataError("ShapeError", `${place.key} has no step ${time}; it has ${field.steps.values.length}.`);
    const frame = this.#frames.frame(read, field, place, time);
    const fitted = this.#fittedAlready(place, field, background);
    const values = frame.then((held) => held.slice());
    if (fitted === null && background.kind !== "running-mean") return { values: await values, background: null };
    const rows: IndexRange = [0, field.grid.lat.length];
    const both = await slabWithBackground(
      read,
      field,
      { times: [time, time + 1], levels: this.#levels(place, field), rows },
      background,
      fitted ?? undefined,
    );
    return { values: await values, background: both.background === null ? null : Float32Array.from(both.background) };
  }

  ribbon(
    place: FieldPlace,
    band: readonly [number, number],
    times: IndexRange,
    background: BackgroundSpec,
    task: number,
  ): Promise<Ribbon> {
    return this.#tasks.run(task, async (running) => {
      const { read, field } = this.#place(place);
      const fitted = await this.#fitted(place, background, running);
      return bandRibbon(read, field, this.#levels(place, field), band, times, background, fitted, running);
    });
  }

  runRecipe(recipe: Recipe, task: number): Promise<RunOutcome> {
    return this.#tasks.run(task, (running) =>
      runRecipe(checkedRecipe(recipe), this.#contents(), this.#parts.crew, {
        program: this.#parts.program,
        signal: running.signal,
        passes: this.#passes,
        progress: ({ title, done, secondsLeft }) => running.report(title, done, secondsLeft),
      }),
    );
  }

  async onProgress(callback: (progress: TaskProgress) => void): Promise<void> {
    this.#tasks.listen(callback);
  }

  async cancel(task: number): Promise<void> {
    this.#tasks.cancel(task);
  }

  #contents(): FileContents[] {
    return [...this.#held.values()].map(({ file }) => file.contents);
  }

  /** Open a file and put it in the place of an earlier one of its name, which stays if this one does not open. */
  async #hold(source: SourceDescription, corrections: readonly Correction[]): Promise<FileContents> {
    // The window numbers its own tasks from 1 up.
    this.#openings -= 1;
    const file = await this.#tasks.run(this.#openings, ({ signal, report }) => {
      const started = Date.now();
      const progress = (done: number): void =>
        report(
          `Reading ${sourceName(source)}`,
          done,
          done > 0 ? ((Date.now() - started) / 1000) * (1 / done - 1) : null,
        );
      return this.#parts.open({ source, corrections }, { signal, progress });
    });
    const name = file.contents.file;
    const earlier = this.#held.get(name);
    this.#held.set(name, { id: ++this.#counter, source, file, corrections });
    this.#forget(name);
    await earlier?.file.close();
    return file.contents;
  }

  #forget(file: string): void {
    this.#frames.forget(file);
    this.#passes.forget(file);
  }

  /** What is open has changed: what is joined of it, too. */
  #tellCrew(): void {
    this.#open = new OpenRecords([...this.#held.values()].map(({ file }) => file));
    this.#parts.crew.setFiles(
      [...this.#held.values()].map(({ id, source, corrections }) => ({ id, source: { source, corrections } })),
    );
  }

  #heldFile(name: string): Held {
    const held = this.#held.get(name);
    if (held === undefined) throw new DataError("NotFoundError", `${name} is not open. Open it again.`);
    return held;
  }

  /** @throws NotFoundError for a field, a level or a member that is not there. */
  #place(place: FieldPlace): { read: FieldReader; field: FieldDescription } {
    const field = this.#open.field(place.key);
    if (place.level !== 0 && field.levels?.[place.level] === undefined)
      throw new DataError("NotFoundError", `${place.key} has no level number ${place.level}.`);
    return { read: this.#open.reader(field, place.member), field };
  }

  #levels({ level }: FieldPlace, field: FieldDescription): readonly number[] | null {
    return field.levels === null ? null : [level];
  }

  #fittedAlready(place: FieldPlace, field: FieldDescription, spec: BackgroundSpec): FittedBackground | null {
    const of = { field, member: place.member };
    return this.#passes.held(of, field.levels === null ? null : place.level, [0, field.grid.lat.length], spec);
  }

  async #fitted(place: FieldPlace, spec: BackgroundSpec, task: Task): Promise<FittedBackground | null> {
    const { field } = this.#place(place);
    const rows: IndexRange = [0, field.grid.lat.length];
    const level = field.levels === null ? null : place.level;
    const of = { field, member: place.member };
    const steps = passJobs(of, level, rows, spec).length;
    const started = Date.now();
    let done = 0;
    return this.#passes.fitted(of, [level], rows, rows, spec, this.#parts.crew, task.signal, () => {
      done += 1;
      const seconds = (Date.now() - started) / 1000;
      task.report("Fitting the background", done / steps, (seconds * (steps - done)) / done);
    });
  }
}
