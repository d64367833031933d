import type { BackgroundSpec } from "../background/spec.ts";
import type { Grid, IndexRange, Levels, StepAxis } from "../field/axes.ts";
import type { Quantity } from "../field/quantity.ts";
import type { Slab } from "../field/slab.ts";

/**
 * What a diagnostic is: one object that says what it needs, computes it chunk by chunk, and describes itself.
 * The window's forms, batch's help, the method cards and the recipe's checks are all made from it.
 */

export type OptionValue = number | string | boolean | readonly number[] | null;
export type OptionValues = Readonly<Record<string, OptionValue>>;

interface OptionCommon {
  /** Key in the recipe. */
  readonly name: string;
  readonly title: string;
  /** One sentence for forms, help and cards. */
  readonly about: string;
  readonly units?: string;
}
export type OptionSpec = OptionCommon &
  (
    | {
        readonly kind: "number" | "integer";
        readonly default: number | null;
        readonly min: number;
        readonly max: number;
      }
    /** A pair [low, high], low ≤ high. */
    | {
        readonly kind: "range";
        readonly default: readonly [number, number] | null;
        readonly min: number;
        readonly max: number;
        readonly integer?: boolean;
      }
    /** A list of numbers, null = all. */
    | {
        readonly kind: "list";
        readonly default: readonly number[] | null;
        readonly min: number;
        readonly max: number;
        readonly integer?: boolean;
      }
    | {
        readonly kind: "choice";
        readonly default: string;
        readonly choices: readonly { readonly value: string; readonly title: string }[];
      }
    | { readonly kind: "boolean"; readonly default: boolean }
  );

export interface InputSpec {
  /** Key of the slab in ChunkInput; "field" is the one that the recipe's `field` names. */
  readonly name: string;
  readonly quantities: readonly Quantity[] | "any";
  readonly about: string;
}

export interface OutputSpec {
  readonly name: string;
  readonly title: string;
  /** SI or trade units; "input" = the units of the input field. */
  readonly units: string;
  readonly dims: readonly string[];
  readonly about: string;
  /** Written only when an option asks for it: the words say which. */
  readonly when?: string;
}

/** What a diagnostic is told about its inputs before anything is read. */
export interface Series {
  readonly grid: Grid;
  readonly steps: StepAxis;
  /** Steps of the record that the recipe selects; every diagnostic works on these alone. */
  readonly times: IndexRange;
  /** The levels that the recipe selects, hPa; null on a field without levels. */
  readonly levels: Levels;
  readonly quantity: Quantity | null;
  readonly units: string;
  readonly background: BackgroundSpec;
}

export interface Plan {
  /** Rows to read, [from, to). */
  readonly rows: IndexRange;
  /** Steps that a chunk needs beyond its own on either side. */
  readonly halo: number;
  /** Whether `background` of ChunkInput is wanted. */
  readonly usesBackground: boolean;
}

export interface ChunkInput {
  /** By input name; each slab holds the steps `loaded`, the selected levels and the planned rows. Not to be modified. */
  readonly slabs: Readonly<Record<string, Slab>>;
  /** Background on the same shape as the slab, by input name; absent where there is none. */
  readonly backgrounds: Readonly<Record<string, Float64Array>>;
  /** The chunk's own steps, as indices into the record. */
  readonly times: IndexRange;
  /** The chunk's steps with the halo, clipped to the record. */
  readonly loaded: IndexRange;
}

/** What a chunk leaves behind for `finish`: flat arrays in buffers of their own, so that they can be transferred. */
export type ChunkPart = Readonly<
  Record<
    string,
    Float64Array<ArrayBuffer> | Float32Array<ArrayBuffer> | Int32Array<ArrayBuffer> | Uint8Array<ArrayBuffer>
  >
>;

export interface Coordinate {
  readonly name: string;
  readonly values: Float64Array;
  readonly units: string;
  /** CF attributes beyond units: standard_name, long_name, calendar, positive, bounds … */
  readonly attributes?: Readonly<Record<string, string>>;
}

export interface ResultVariable {
  readonly name: string;
  readonly title: string;
  readonly units: string;
  readonly dims: readonly string[];
  readonly shape: readonly number[];
  readonly data: Float64Array | Float32Array | Int32Array | Uint8Array;
  /** Reason code of each number (field/reasons.ts), same size as `data`; absent = all valid. */
  readonly reasons?: Uint8Array;
}

/** What `finish` returns; the engine adds id, options and provenance. */
export interface Outcome {
  readonly coordinates: readonly Coordinate[];
  readonly variables: readonly ResultVariable[];
  /** Sentences for card, briefing and run.json: what was left out or substituted, and why. */
  readonly notes: readonly string[];
}

export interface Diagnostic {
  /** Catalogue id, kebab-case. */
  readonly id: string;
  readonly title: string;
  /** One sentence: what question it answers. */
  readonly summary: string;
  /** MathML, presentation, without the <math> element's attributes set. */
  readonly formula: string;
  /** Where it is valid, in words. */
  readonly validity: string;
  /** Author, year, journal. */
  readonly sources: readonly string[];
  readonly inputs: readonly InputSpec[];
  readonly options: readonly OptionSpec[];
  readonly outputs: readonly OutputSpec[];
  /** Dimensions that number rows of a table, and what the table is called: each becomes a CSV and a JSON file of its own. */
  readonly tables?: Readonly<Record<string, string>>;
  /** @throws DataError when the series cannot serve (grid does not close, band holds no row, too short). */
  plan(series: Series, options: OptionValues): Plan;
  /** Pure, and the same numbers however the record is cut. */
  chunk(input: ChunkInput, series: Series, options: OptionValues): ChunkPart;
  /** Parts in the order of time, gap-free over `series.times`. */
  finish(parts: readonly ChunkPart[], series: Series, options: OptionValues): Outcome;
}
