import type { Decoding } from "./cf/decoding.ts";

/** What every container (netCDF classic now; netCDF-4 and GRIB the same way) offers to the layers above. */

export type AttributeValue = string | number | readonly number[];
export type Attributes = Readonly<Record<string, AttributeValue>>;

/** Storage types that carry numbers; `char` carries text and is never a field. */
export type StoredType =
  | "int8"
  | "uint8"
  | "int16"
  | "uint16"
  | "int32"
  | "uint32"
  | "int64"
  | "uint64"
  | "float32"
  | "float64"
  | "char";

export interface StoredDimension {
  readonly name: string;
  /** For the record dimension: the number of whole records that the file really holds. */
  readonly length: number;
  readonly isRecord: boolean;
}

export interface StoredVariable {
  readonly name: string;
  readonly type: StoredType;
  /** Names of dimensions, slowest first. */
  readonly dims: readonly string[];
  readonly shape: readonly number[];
  readonly attributes: Attributes;
}

export interface VariableStore {
  /** File name. */
  readonly name: string;
  /** "netCDF classic (CDF-1)" and the like, for people. */
  readonly format: string;
  readonly dimensions: readonly StoredDimension[];
  readonly variables: readonly StoredVariable[];
  readonly attributes: Attributes;
  /** Things that were repaired or left out on opening, in words. */
  readonly notes: readonly string[];
  /**
   * Numbers of a hyperslab as they stand in the file (packed values stay packed), row-major, shape `count`.
   *
   * Reads only the bytes of the slab, coalescing runs.
   *
   * @throws NotFoundError, ShapeError (slab outside the variable), FormatError.
   */
  readNumbers(variable: string, start: readonly number[], count: readonly number[]): Promise<Float64Array>;
  /**
   * The same, decoded on the way: missing values NaN, packing undone. Only where that saves a pass over the numbers.
   *
   * @param into Used for the numbers if it has just their size.
   * @throws As `readNumbers` does.
   */
  readDecoded?(
    variable: string,
    start: readonly number[],
    count: readonly number[],
    how: Decoding,
    into?: Float64Array,
  ): Promise<Float64Array>;
  close(): Promise<void>;
}
