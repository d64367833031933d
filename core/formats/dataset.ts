import type { Grid, IndexRange, Levels, StepAxis } from "../field/axes.ts";
import type { Quantity } from "../field/quantity.ts";
import type { Slab } from "../field/slab.ts";

/** One field that a file holds, as it was understood. Plain data: it crosses worker boundaries and stands in `--list`. */
export interface FieldDescription {
  /** `file name/variable`; unique among what is open. */
  readonly key: string;
  readonly file: string;
  readonly variable: string;
  readonly longName: string;
  /** null: not recognised; the user may say what it is. */
  readonly quantity: Quantity | null;
  /** Why it was taken for that: "standard_name is geopotential", "units m s-1 and name u", "you said so". */
  readonly why: string;
  /** Units in the file and after conversion; equal for an unrecognised field. */
  readonly unitsInFile: string;
  readonly units: string;
  readonly grid: Grid;
  readonly steps: StepAxis;
  readonly levels: Levels;
  /** True where the user said that it is never part of a record with others. */
  readonly apart?: boolean;
  /** Numbers of an ensemble's members as the file gives them; null on a field without members. */
  readonly members: readonly number[] | null;
  /** Start of the forecast that all steps belong to, days as `steps` counts them; null for analyses and records. */
  readonly reference: number | null;
  /** What a record of several files, or of several variables, is put together from; absent on a field that stands alone. */
  readonly parts?: readonly FieldPart[];
}

/** A field that makes part of a record, and where its own steps, levels and members stand in it. */
export interface FieldPart {
  readonly key: string;
  readonly file: string;
  readonly variable: string;
  /** Own index → index in the record; increasing. */
  readonly steps: Int32Array;
  /** Own index → index in the record; one entry on a field without levels. */
  readonly levels: Int32Array;
  readonly members: Int32Array;
}

/** Names of the files that a field is read from. */
export function filesOf({ file, parts }: FieldDescription): readonly string[] {
  return parts === undefined ? [file] : [...new Set(parts.map((part) => part.file))];
}

/** A variable that is no usable field, and why. */
export interface LeftOut {
  readonly file: string;
  readonly variable: string;
  readonly why: string;
}

/** What the user said about a variable that could not be recognised, or was recognised wrongly. Lives in the case. */
export interface Correction {
  readonly file: string;
  readonly variable: string;
  readonly quantity?: Quantity;
  readonly units?: string;
  /** hPa, for a variable that has no level axis. */
  readonly level?: number;
  /** True: it is a field of its own, never part of a record with others. */
  readonly apart?: boolean;
}

export interface FileContents {
  readonly file: string;
  readonly format: string;
  readonly bytes: number;
  readonly fields: readonly FieldDescription[];
  readonly leftOut: readonly LeftOut[];
  /** Repairs and oddities, in words. */
  readonly notes: readonly string[];
  /** Global attributes worth showing: title, institution, source, history, comment. */
  readonly about: Readonly<Record<string, string>>;
}

/** Which part of a field to read. Absent = all. */
export interface SlabRequest {
  readonly times: IndexRange;
  /** Indices into `levels`; ignored on a field without levels. */
  readonly levels?: readonly number[];
  /** Index into `members`; absent = the first. */
  readonly member?: number;
  /** Rows south → north. */
  readonly rows?: IndexRange;
  /** Memory of an earlier slab that is no longer needed: used for this one where it has just the size. */
  readonly into?: Float64Array | undefined;
}

/** Reads slabs of one field and member. */
export type FieldReader = (request: Omit<SlabRequest, "member">) => Promise<Slab>;

/** An open file: what it holds, and slabs of it in SI units, south → north, west → east. */
export interface OpenFile {
  readonly contents: FileContents;
  /** @throws NotFoundError for an unknown key; ShapeError for a request outside the field; FormatError. */
  read(key: string, request: SlabRequest): Promise<Slab>;
  close(): Promise<void>;
}
