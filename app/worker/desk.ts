import type { BackgroundSpec } from "../../core/background/spec.ts";
import type { IndexRange } from "../../core/field/axes.ts";
import type { Correction, FileContents } from "../../core/formats/dataset.ts";
import type { Recipe, Result } from "../../core/recipe/recipe.ts";

/** Where a file's bytes come from, as plain data that crosses to a worker. */
export type SourceDescription =
  | { readonly kind: "file"; readonly file: File }
  | { readonly kind: "range"; readonly name: string; readonly size: number; readonly url: string }
  | { readonly kind: "path"; readonly path: string };

export interface Refusal {
  readonly file: string;
  /** What is wrong, where, and what to do. */
  readonly words: string;
}

export interface OpenReport {
  readonly opened: readonly FileContents[];
  readonly refused: readonly Refusal[];
}

export interface FieldPlace {
  readonly key: string;
  /** Index into the field's levels; 0 on a field without levels. */
  readonly level: number;
  /** Number of the member; null on a field without members. */
  readonly member: number | null;
}

export interface Frame {
  /** Row-major (nLat, nLon), south → north, west → east, NaN missing. */
  readonly values: Float32Array<ArrayBuffer>;
  /** The background at this step; null while it is not fitted, or where there is none. */
  readonly background: Float32Array<ArrayBuffer> | null;
}

export interface Ribbon {
  readonly times: IndexRange;
  /** Band mean (or row) of the field, and of its background, row-major (steps, nLon). */
  readonly values: Float32Array<ArrayBuffer>;
  readonly background: Float32Array<ArrayBuffer> | null;
}

/** Work in progress; `done` runs from 0 to 1. */
export interface TaskProgress {
  readonly task: number;
  readonly title: string;
  readonly done: number;
  /** null while it cannot be told. */
  readonly secondsLeft: number | null;
}

/** What the window asks of its desk worker, which alone holds open files and numbers. Every call may reject with a DataError's name and words. */
export interface Desk {
  /** Opens what can be opened; the files already open stay. A file of the same name replaces the earlier one. */
  open(sources: readonly SourceDescription[], corrections: readonly Correction[]): Promise<OpenReport>;
  /** Read a file's contents anew under other corrections. */
  correct(file: string, corrections: readonly Correction[]): Promise<FileContents>;
  close(file: string): Promise<void>;
  /** Fit a background for later frames; resolves at once where no pass is needed. */
  prepareBackground(place: FieldPlace, background: BackgroundSpec, task: number): Promise<void>;
  frame(place: FieldPlace, time: number, background: BackgroundSpec): Promise<Frame>;
  /** `band`: degrees north, both ends included; equal ends = the nearest row. */
  ribbon(
    place: FieldPlace,
    band: readonly [number, number],
    times: IndexRange,
    background: BackgroundSpec,
    task: number,
  ): Promise<Ribbon>;
  /** The very engine that batch runs. */
  runRecipe(recipe: Recipe, task: number): Promise<RunOutcome>;
  /** Progress of every task over half a second goes to this callback (a comlink proxy). */
  onProgress(callback: (progress: TaskProgress) => void): Promise<void>;
  cancel(task: number): Promise<void>;
}

export interface RunOutcome {
  readonly results: readonly Result[];
  readonly failed: readonly { readonly id: string; readonly words: string }[];
}
