import type { IndexRange } from "../../field/axes.ts";
import type { GridAxes } from "./grid-axes.ts";

const COLUMNS_FIRST = 32;
const TURNING = 16;

/**
 * Copy rows of a message into a slab: south → north, west → east, converted.
 *
 * @param values Numbers in the order of the file, whatever its scanning mode (FM 92, code table 3.4).
 * @param rows   Rows south → north.
 * @param into   Takes shape (rows, columns) from `at` on: value · factor + offset.
 */
export function copyRows(
  values: Float64Array,
  axes: GridAxes,
  rows: IndexRange,
  factor: number,
  offset: number,
  into: Float64Array,
  at: number,
): void {
  const { ni, nj, scan } = axes.definition;
  const nLon = axes.columns.values.length;
  const isColumnsFirst = (scan & COLUMNS_FIRST) !== 0;
  const isTurning = (scan & TURNING) !== 0;
  let next = at;
  for (let row = rows[0]; row < rows[1]; row++) {
    const j = axes.rows.first + axes.rows.step * row;
    if (isColumnsFirst) {
      for (let column = 0; column < nLon; column++) {
        const i = axes.columns.first + axes.columns.step * column;
        const place = isTurning && i % 2 === 1 ? nj - 1 - j : j;
        into[next++] = (values[i * nj + place] as number) * factor + offset;
      }
      continue;
    }
    const isTurned = isTurning && j % 2 === 1;
    let from = j * ni + (isTurned ? ni - 1 - axes.columns.first : axes.columns.first);
    const step = isTurned ? -axes.columns.step : axes.columns.step;
    for (let column = 0; column < nLon; column++, from += step)
      into[next++] = (values[from] as number) * factor + offset;
  }
}
