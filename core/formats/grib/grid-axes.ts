import { DataError } from "../../errors.ts";
import type { Grid } from "../../field/axes.ts";
import { gaussianLatitudes } from "../../grid/gaussian-rows.ts";
import { gridOf, type OrderedAxis, orderedColumns, orderedRows } from "../cf/horizontal.ts";
import type { GridDefinition } from "./grib-index.ts";

const WESTWARD = 128;
const NORTHWARD = 64;

/** A grid's axes in the core's order, and where their entries stand in the file. */
export interface GridAxes {
  readonly definition: GridDefinition;
  readonly grid: Grid;
  readonly rows: OrderedAxis;
  readonly columns: OrderedAxis;
}

/** A decimal fraction as it was meant: 0.1 + 0.2 is 0.3. */
function plain(value: number): number {
  return Math.round(value * 1e9) / 1e9;
}

function evenAxis(first: number, step: number, n: number): Float64Array {
  return Float64Array.from({ length: n }, (_, i) => plain(first + i * step));
}

/** Longitudes in the order of the file, degrees east, running on beyond 360 or below 0. */
function storedColumns(grid: GridDefinition): Float64Array {
  const { ni, scan, firstLon, lastLon, lonStep, precision } = grid;
  if (ni === 1) return Float64Array.of(plain(firstLon));
  const sign = (scan & WESTWARD) !== 0 ? -1 : 1;
  let span = sign * (lastLon - firstLon);
  while (span <= 0) span += 360;
  let step = span / (ni - 1);
  // Some files give an end that does not fit; where the step makes a full circle, it is the step that is meant.
  const stepCloses = lonStep !== null && Math.abs(lonStep * ni - 360) <= Math.min((ni * precision) / 2, lonStep / 4);
  if (stepCloses && Math.abs(step - lonStep) > precision) step = lonStep;
  // Both ends are rounded by half a unit at most: a full circle within that has its exact step.
  const slack = 2 * precision;
  if (Math.abs(step * ni - 360) <= slack) step = 360 / ni;
  else if (Math.abs(step * (ni - 1) - 360) <= slack) step = 360 / (ni - 1);
  return evenAxis(firstLon, sign * step, ni);
}

function gaussianRows({ nj, parallels, firstLat, scan }: GridDefinition): Float64Array {
  if (nj > 2 * parallels)
    throw new DataError("GridError", `its ${nj} rows are more than the ${2 * parallels} of its Gaussian grid`);
  const all = gaussianLatitudes(parallels);
  const isNorthward = (scan & NORTHWARD) !== 0;
  if (!isNorthward) all.reverse();
  let first = 0;
  for (let i = 1; i < all.length; i++)
    if (Math.abs((all[i] as number) - firstLat) < Math.abs((all[first] as number) - firstLat)) first = i;
  // Rounding moves it by far less than a tenth of a row.
  if (Math.abs((all[first] as number) - firstLat) > 9 / parallels)
    throw new DataError("GridError", `its first row at ${firstLat}° is none of a Gaussian grid of ${parallels} rows`);
  if (first + nj > all.length)
    throw new DataError("GridError", `its ${nj} rows from ${firstLat}° on run beyond the pole`);
  return all.slice(first, first + nj);
}

function storedRows(grid: GridDefinition): Float64Array {
  if (grid.kind === "gaussian") return gaussianRows(grid);
  const { nj, firstLat, lastLat, scan } = grid;
  if (nj === 1) return Float64Array.of(plain(firstLat));
  if (((scan & NORTHWARD) !== 0) !== lastLat > firstLat)
    throw new DataError(
      "GridError",
      `its rows run from ${firstLat}° to ${lastLat}°, against the direction that its scanning mode says`,
    );
  return evenAxis(firstLat, (lastLat - firstLat) / (nj - 1), nj);
}

/**
 * Rows and columns of a grid.
 *
 * @throws GridError, its message the reason why fields on it are left out.
 */
export function gridAxes(definition: GridDefinition): GridAxes {
  const rows = orderedRows(storedRows(definition), "its grid");
  const columns = orderedColumns(storedColumns(definition), "its grid");
  return { definition, grid: gridOf(rows, columns), rows, columns };
}
