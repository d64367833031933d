import { DataError } from "../errors.ts";
import type { Grid } from "../field/axes.ts";

/** Degrees; storage as float32 moves a value under 360 by at most 1.6e-5 and a spacing by twice that. */
export const LON_TOLERANCE = 1e-4;

/** Evenly spaced within the tolerance. */
export function isEven(lon: Float64Array): boolean {
  const n = lon.length;
  if (n < 3) return true;
  const step = ((lon[n - 1] as number) - (lon[0] as number)) / (n - 1);
  return lon.every((value, i) => Math.abs(value - (lon[0] as number) - i * step) <= LON_TOLERANCE);
}

/** Evenly spaced and once round the circle, no meridian twice. Longitudes increasing. */
export function closesCircle(lon: Float64Array): boolean {
  const n = lon.length;
  if (n < 3 || !isEven(lon)) return false;
  const step = ((lon[n - 1] as number) - (lon[0] as number)) / (n - 1);
  // A quarter of a column at most: on a fine grid the errors allowed to each step could add up to a missing column.
  return Math.abs(step * n - 360) <= Math.min(LON_TOLERANCE * n, step / 4);
}

/** @throws GridError, with the reason and what to do, for a grid that has no zonal waves. */
export function requireCircle(grid: Grid, what: string): void {
  if (grid.closesCircle) return;
  const { lon } = grid;
  const n = lon.length;
  const from = (lon[0] ?? Number.NaN).toFixed(2);
  const to = (lon[n - 1] ?? Number.NaN).toFixed(2);
  const why = isEven(lon)
    ? `its ${n} columns run from ${from}° to ${to}°E and do not close the circle`
    : `its ${n} columns from ${from}° to ${to}°E are not evenly spaced`;
  throw new DataError(
    "GridError",
    `${what} need a full circle of longitude, and this grid has none: ${why}. Use a file with every longitude; maps work with this one.`,
  );
}
