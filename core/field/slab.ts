import type { Quantity } from "./quantity.ts";

/** A piece of a field in memory: SI units (height in gpm), NaN where missing. */
export interface Slab {
  readonly quantity: Quantity | null;
  readonly units: string;
  /** Row-major, shape (nTime, nLevel, nLat, nLon): south → north, west → east. */
  readonly data: Float64Array;
  readonly shape: readonly [nTime: number, nLevel: number, nLat: number, nLon: number];
}
