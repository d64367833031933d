import { DataError } from "../../errors.ts";
import type { Grid } from "../../field/axes.ts";
import { closesCircle, LON_TOLERANCE } from "../../grid/circle.ts";

/** One axis in the core's order, and where each of its entries stands in the file. */
export interface OrderedAxis {
  readonly values: Float64Array;
  /** First entry's index in the file. */
  readonly first: number;
  /** +1 as in the file, −1 turned round. */
  readonly step: 1 | -1;
  readonly note: string | null;
}

/** Rows south → north. @throws GridError for latitudes that are not in order, or not latitudes. */
export function orderedRows(stored: Float64Array, where: string): OrderedAxis {
  const n = stored.length;
  const falls = n > 1 && (stored[n - 1] as number) < (stored[0] as number);
  const values = falls ? stored.slice().reverse() : stored.slice();
  for (let i = 0; i < n; i++) {
    const value = values[i] as number;
    if (!(Math.abs(value) <= 90 + LON_TOLERANCE))
      throw new DataError("GridError", `${where}: row ${i} is at latitude ${value}, which is none.`);
    if (i > 0 && value <= (values[i - 1] as number))
      throw new DataError("GridError", `${where}: latitudes do not run one way at row ${i}.`);
  }
  return { values, first: falls ? n - 1 : 0, step: falls ? -1 : 1, note: null };
}

/** Columns west → east from a first value in [−180, 360), the repeated meridian dropped. @throws GridError for longitudes that are not in order. */
export function orderedColumns(stored: Float64Array, where: string): OrderedAxis {
  const n = stored.length;
  // Most steps decide the direction: one step may be the jump at the date line.
  let rising = 0;
  for (let i = 1; i < n; i++) {
    const step = (stored[i] as number) - (stored[i - 1] as number);
    // A step over more than half the circle is that jump, and runs the other way; of two columns alone a rise is one.
    rising += step < -180 || (step > 0 && (step <= 180 || n === 2)) ? 1 : -1;
  }
  const falls = rising < 0;
  const values = falls ? stored.slice().reverse() : stored.slice();
  let turns = 0;
  for (let i = 1; i < n; i++) {
    // The jump goes back by more than half the circle; less is disorder.
    if ((values[i] as number) < (values[i - 1] as number) - 180 && turns === 0) turns = 360;
    values[i] = (values[i] as number) + turns;
    if (!((values[i] as number) > (values[i - 1] as number)))
      throw new DataError("GridError", `${where}: longitudes do not run one way at column ${i}.`);
  }
  const first = values[0] as number;
  if (!Number.isFinite(first)) throw new DataError("GridError", `${where}: the first longitude is ${first}.`);
  const shift =
    first < -180 ? 360 * Math.ceil((-180 - first) / 360) : first >= 360 ? -360 * Math.floor(first / 360) : 0;
  if (shift !== 0) for (let i = 0; i < n; i++) values[i] = (values[i] as number) + shift;
  const span = (values[n - 1] as number) - (values[0] as number);
  const repeats = n > 2 && Math.abs(span - 360) <= 2 * LON_TOLERANCE;
  if (span > 360 + 2 * LON_TOLERANCE)
    throw new DataError("GridError", `${where}: longitudes run over ${span.toFixed(2)}°, more than one circle.`);
  return {
    values: repeats ? values.slice(0, n - 1) : values,
    first: falls ? n - 1 : 0,
    step: falls ? -1 : 1,
    note: repeats ? `${where}: the last column repeats the first meridian and is left out.` : null,
  };
}

export function gridOf(rows: OrderedAxis, columns: OrderedAxis): Grid {
  return { lat: rows.values, lon: columns.values, closesCircle: closesCircle(columns.values) };
}
