import type { BackgroundSpec } from "../background/spec.ts";
import type { OptionValue, OptionValues, Outcome } from "../diagnostics/entry.ts";
import type { Quantity } from "../field/quantity.ts";
import type { Correction } from "../formats/dataset.ts";

/** One wanted result. Every further key is an option of its diagnostic. */
export interface RecipeResult {
  /** File name of the result, and its name in messages: letters, digits, `-`, `_`. */
  readonly id: string;
  readonly diagnostic: string;
  /** A quantity, or `file name/variable`. */
  readonly field: string;
  /** hPa, one or several; absent = all levels of the field. */
  readonly level?: number | readonly number[];
  /** Numbers of members, one or several; absent = all members of the field. */
  readonly member?: number | readonly number[];
  /** ISO dates, both included; on a record that is not a time, its numbers. Absent = the whole record. */
  readonly period?: readonly [string | number, string | number];
  readonly [option: string]: OptionValue | readonly (string | number)[] | undefined;
}

/** The one recipe format of window and batch. */
export interface Recipe {
  readonly isohypse: 1;
  readonly title?: string;
  readonly background?: BackgroundSpec;
  /** What variables are that could not be recognised; batch opens its files with these. */
  readonly corrections?: readonly Correction[];
  readonly results: readonly RecipeResult[];
}

export interface Provenance {
  /** "Isohypse 0.1.0". */
  readonly program: string;
  /** ISO 8601, UTC. */
  readonly made: string;
  readonly recipe: RecipeResult;
  readonly background: BackgroundSpec;
  /** What was read. */
  readonly inputs: readonly {
    readonly file: string;
    readonly bytes: number;
    readonly variable: string;
    readonly quantity: Quantity | null;
    readonly why: string;
  }[];
}

export interface Result extends Outcome {
  readonly id: string;
  readonly diagnostic: string;
  readonly title: string;
  /** Options in force, defaults filled in. */
  readonly options: OptionValues;
  readonly provenance: Provenance;
}
