import type { BackgroundSpec } from "./spec.ts";

/** A background that needs a pass over the record, ready to be evaluated at any step. */
export interface FittedBackground {
  readonly spec: BackgroundSpec;
  /** Coefficient fields, row-major, shape (nCoefficients, nLevel, nLat, nLon): mean; then cos, sin of each harmonic. NaN where too few values. */
  readonly coefficients: Float64Array<ArrayBuffer>;
  readonly nCoefficients: number;
  readonly nLon: number;
  /** Rows that the coefficients cover. */
  readonly rows: readonly [from: number, to: number];
}
