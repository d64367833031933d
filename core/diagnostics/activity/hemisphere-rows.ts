import { RADIANS_PER_DEGREE } from "../../constants.ts";
import { DataError } from "../../errors.ts";

const ROW_TOLERANCE = 1e-4; // degrees; float32 storage moves a latitude by at most 4e-6

/** The rows of one hemisphere, from the equator to the pole. */
export interface HemisphereRows {
  readonly side: 1 | -1;
  /** Rows of the grid. */
  readonly rows: Int32Array;
  /** Degrees, counted poleward. */
  readonly poleward: Float64Array;
  /** ∫ cos φ dφ over each row: sin of its poleward edge less that of the other. They sum to 1. */
  readonly weights: Float64Array;
}

/**
 * Edges lie midway between rows, at the equator and at the pole; a row on the equator has the half that lies in the hemisphere.
 *
 * @throws GridError where the rows do not reach from within one row spacing of the equator to that of the pole.
 */
export function hemisphereRows(lat: Float64Array, side: 1 | -1): HemisphereRows {
  const rows = Array.from(lat.keys()).filter((row) => side * lat[row] >= -ROW_TOLERANCE);
  if (side === -1) rows.reverse();
  const poleward = Float64Array.from(rows, (row) => Math.max(0, side * lat[row]));
  const n = rows.length;
  const isWhole =
    n > 1 &&
    poleward[0] <= poleward[1] - poleward[0] + ROW_TOLERANCE &&
    90 - poleward[n - 1] <= poleward[n - 1] - poleward[n - 2] + ROW_TOLERANCE;
  if (!isWhole)
    throw new DataError(
      "GridError",
      `Local wave activity needs every row of the ${side === 1 ? "northern" : "southern"} hemisphere from the equator to the pole, and the grid's rows run from ${lat[0].toFixed(2)}° to ${lat[lat.length - 1].toFixed(2)}°N. Use a field of the whole hemisphere, or the other one.`,
    );
  const edge = (j: number): number =>
    j === 0 ? 0 : j === n ? 1 : Math.sin(((poleward[j - 1] + poleward[j]) / 2) * RADIANS_PER_DEGREE);
  const weights = poleward.map((_, j) => edge(j + 1) - edge(j));
  return { side, rows: Int32Array.from(rows), poleward, weights };
}
