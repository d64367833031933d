import { DataError } from "../../errors.ts";
import { nearestRow } from "../../grid/rows.ts";

/** Degrees: float32 storage moves a latitude by at most 4e-6. */
export const ROW_TOLERANCE = 1e-4;

/** 1 for the northern hemisphere, −1 for the southern; a latitude times this is counted poleward. */
export type Side = 1 | -1;

/** `84°N`. */
export function latitudeText(latitude: number): string {
  const size = Number(Math.abs(latitude).toFixed(2));
  return `${size}°${size === 0 ? "" : latitude < 0 ? "S" : "N"}`;
}

/**
 * The row for an angle: the nearest, ties equatorward.
 *
 * @param poleward Degrees, counted poleward on `side`; under 0 is the other hemisphere.
 * @param why      What the row is for, in words.
 * @throws GridError naming the latitude where the grid has no row within half a row spacing of it, nor one that stands for the pole.
 */
export function rowFor(lat: Float64Array, side: Side, poleward: number, why: string): number {
  const latitude = side * poleward;
  const row = nearestRow(lat, latitude);
  const off = Math.abs(lat[row] - latitude);
  const spacing = Math.max(row > 0 ? lat[row] - lat[row - 1] : 0, row + 1 < lat.length ? lat[row + 1] - lat[row] : 0);
  // As with row edges: the last row reaches to the pole where that is nearer than a row spacing (Gaussian grids have none on it).
  const isCap = Math.abs(latitude) > Math.abs(lat[row]) && 90 - Math.abs(lat[row]) < spacing;
  const isNear = off <= spacing / 2 + ROW_TOLERANCE || isCap;
  if (isNear && Math.abs(latitude) <= 90 + ROW_TOLERANCE) return row;
  throw new DataError(
    "GridError",
    `Blocking needs a row near ${latitudeText(latitude)} (${why}), and the grid's rows run from ${latitudeText(lat[0])} to ${latitudeText(lat[lat.length - 1])}. ` +
      "Use a field that reaches there, the other hemisphere, or other latitudes.",
  );
}

/** The rows that a gradient index compares, one entry for each offset (one dimension) or central row (two dimensions). */
export interface Reversals {
  /** Rows of the grid. */
  readonly poleward: Int32Array;
  readonly centre: Int32Array;
  readonly equatorward: Int32Array;
  /** Of the subtropical condition; null without it. */
  readonly subtropical: Int32Array | null;
  /** Real distances between the rows, degrees: centre to poleward, equatorward to centre, subtropical to equatorward. */
  readonly north: Float64Array;
  readonly south: Float64Array;
  readonly far: Float64Array;
  /** Furthest that a row lies from its angle, degrees. */
  readonly off: number;
}

/** Angles of a reversal, degrees poleward. */
export interface ReversalAngles {
  readonly poleward: number;
  readonly centre: number;
  readonly equatorward: number;
  /** null without the condition. */
  readonly subtropical: number | null;
  /** Where the angles come from, in words. */
  readonly why: string;
}

/** @throws GridError where a row is not on the grid, or two angles fall on one row. */
export function reversals(lat: Float64Array, side: Side, angles: readonly ReversalAngles[]): Reversals {
  const rows = (angle: (one: ReversalAngles) => number): Int32Array =>
    Int32Array.from(angles, (one) => rowFor(lat, side, angle(one), one.why));
  const poleward = rows((one) => one.poleward);
  const centre = rows((one) => one.centre);
  const equatorward = rows((one) => one.equatorward);
  const hasFar = angles.every((one) => one.subtropical !== null);
  const subtropical = hasFar ? rows((one) => one.subtropical ?? 0) : null;
  const distances = (upper: Int32Array, lower: Int32Array): Float64Array =>
    Float64Array.from(angles, ({ why }, i) => {
      const distance = side * (lat[upper[i]] - lat[lower[i]]);
      if (distance > ROW_TOLERANCE) return distance;
      throw new DataError(
        "GridError",
        `Blocking compares two rows that fall together at ${latitudeText(lat[upper[i]])} (${why}): the grid's rows are too far apart. Use a finer field, or angles further apart.`,
      );
    });
  let off = 0;
  angles.forEach((one, i) => {
    const pairs = [
      [one.poleward, poleward[i]],
      [one.centre, centre[i]],
      [one.equatorward, equatorward[i]],
      ...(subtropical === null ? [] : [[one.subtropical ?? 0, subtropical[i]]]),
    ];
    for (const [angle, row] of pairs) off = Math.max(off, Math.abs(side * lat[row] - angle));
  });
  return {
    poleward,
    centre,
    equatorward,
    subtropical,
    north: distances(poleward, centre),
    south: distances(centre, equatorward),
    far: subtropical === null ? new Float64Array(angles.length) : distances(equatorward, subtropical),
    off,
  };
}
