import { DataError } from "../errors.ts";

/** Rows from pole to equator of the finest Gaussian grid that is accepted; those in use have 2560 at most. */
const MOST_PARALLELS = 4000;
/** Newton's steps from the first guess; three suffice in double precision, the rest is for safety. */
const MOST_STEPS = 8;

/**
 * Latitudes of a Gaussian grid: the zeros of the Legendre polynomial of degree 2N, as sin φ.
 *
 * Newton's method from cos(π (i + ¾)/(2N + ½)), with Pₙ by the three-term recurrence
 * (Abramowitz & Stegun 1964, 25.4.29 and 22.16.6, 22.7.10).
 *
 * @param parallels N, rows between a pole and the equator.
 * @returns Degrees, south → north, shape (2 N).
 * @throws GridError for an N that no grid has.
 */
export function gaussianLatitudes(parallels: number): Float64Array {
  if (!(Number.isInteger(parallels) && parallels > 0 && parallels <= MOST_PARALLELS))
    throw new DataError("GridError", `a Gaussian grid of ${parallels} rows from pole to equator is none.`);
  const n = 2 * parallels;
  const rows = new Float64Array(n);
  for (let i = 0; i < parallels; i++) {
    let x = Math.cos((Math.PI * (i + 0.75)) / (n + 0.5));
    for (let step = 0; step < MOST_STEPS; step++) {
      let p = x;
      let before = 1;
      for (let k = 2; k <= n; k++) {
        const next = ((2 * k - 1) * x * p - (k - 1) * before) / k;
        before = p;
        p = next;
      }
      const shift = (p * (1 - x * x)) / (n * (before - x * p));
      x -= shift;
      if (Math.abs(shift) < 1e-15) break;
    }
    const latitude = (Math.asin(x) * 180) / Math.PI;
    rows[i] = -latitude;
    rows[n - 1 - i] = latitude;
  }
  return rows;
}
