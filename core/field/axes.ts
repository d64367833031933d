export const CALENDARS = ["standard", "proleptic_gregorian", "julian", "noleap", "all_leap", "360_day"] as const;
/** Calendars of the CF conventions, section 4.4.1. */
export type Calendar = (typeof CALENDARS)[number];

/** Rows and columns of a regular or Gaussian latitude–longitude grid, as the core keeps every field. */
export interface Grid {
  /** Degrees north, south → north, shape (nLat). */
  readonly lat: Float64Array;
  /** Degrees east, west → east, strictly increasing, first value in [−180, 360), no repeated meridian, shape (nLon). */
  readonly lon: Float64Array;
  /** True if the columns are evenly spaced and go once round the whole circle. */
  readonly closesCircle: boolean;
}

/** The axis that steps: times, or a record that is not a time (`month`). */
export interface StepAxis {
  readonly kind: "time" | "record";
  /** The axis variable's name in the file. */
  readonly name: string;
  /** `time`: days since 1970-01-01 00 UTC counted in `calendar`, increasing. `record`: the axis' own numbers. Shape (nTime). */
  readonly values: Float64Array;
  readonly calendar: Calendar;
}

/** Pressure levels in hPa, in the order of the file; null on a field that states none. */
export type Levels = Float64Array | null;

/** Half-open range of indices, [from, to). */
export type IndexRange = readonly [from: number, to: number];
