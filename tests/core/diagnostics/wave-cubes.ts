import { expect } from "vitest";
import { type Cube, dailySteps } from "./run-diagnostic.ts";

export const RAD = Math.PI / 180;
/** A sum of N products of heights of 5500, each rounded to 2⁻⁵³: the error of a coefficient, twice over for A = 2|c|, and once for each side. */
export const HEIGHT_ROUNDING = 8 * 48 * 5600 * 2 ** -53;

/** The reference script's record. */
export function referenceCube(): Cube {
  const [nTime, nLat, nLon] = [40, 9, 48];
  const lat = Float64Array.from({ length: nLat }, (_, j) => 40 + 2.5 * j);
  const lon = Float64Array.from({ length: nLon }, (_, i) => -180 + 7.5 * i);
  const values = new Float64Array(nTime * nLat * nLon);
  let at = 0;
  for (let t = 0; t < nTime; t++)
    for (let j = 0; j < nLat; j++)
      for (let i = 0; i < nLon; i++) {
        const l = (lon[i] as number) * RAD;
        const smooth =
          5500 -
          20 * j +
          90 * Math.cos(2 * (l - (30 + 4 * t) * RAD)) +
          (60 + 2 * j) * Math.cos(3 * (l - (10 - 2.5 * t + j) * RAD)) +
          40 * Math.cos(l - 1);
        values[at++] = smooth + (((t * 13 + j * 7 + i * 29) % 23) - 11) + (((t * t * 3 + i * i * 5 + j) % 17) - 8);
      }
  return { values, lat, lon, steps: dailySteps(nTime), levels: Float64Array.of(500) };
}

/** One row of one step. */
export function rowCube(x: (lon: number) => number, lon: Float64Array): Cube {
  return { values: lon.map(x), lat: Float64Array.of(55), lon, steps: dailySteps(1), levels: Float64Array.of(500) };
}

export function expectAll(
  got: ArrayLike<number>,
  want: readonly number[],
  limit: number | ((i: number) => number),
  words: string,
): void {
  expect(got.length, words).toBe(want.length);
  for (let i = 0; i < want.length; i++) {
    const bound = typeof limit === "number" ? limit : limit(i);
    const off = Math.abs((got[i] as number) - (want[i] as number));
    expect(off <= bound, `${words}, number ${i}: ${got[i]}, should be ${want[i]}, limit ${bound}`).toBe(true);
  }
}
