import { DataError } from "../../errors.ts";
import { reasonCode } from "../../field/reasons.ts";
import { requireCircle } from "../../grid/circle.ts";
import { sidesOf } from "../blocks/block-choice.ts";
import { timeCoordinate } from "../blocks/time-coordinate.ts";
import type { Coordinate, OptionValues, Series } from "../entry.ts";
import { type HemisphereRows, hemisphereRows } from "./hemisphere-rows.ts";
import { isPole } from "./wave-activity.ts";

const EQUATOR = reasonCode("equator");
const POLE = reasonCode("pole");
const ROW_TOLERANCE = 1e-4; // degrees

/** Where the results stand: rows of the hemispheres that are written. */
export interface ActivityFrame {
  readonly hemispheres: readonly HemisphereRows[];
  /** Grid rows of the results, south → north. */
  readonly rows: readonly number[];
  /** Reason code of each of these rows; 0 where there is a value. */
  readonly absence: Uint8Array;
  readonly nLevel: number;
  readonly nLon: number;
  readonly nTime: number;
}

/** @throws GridError or OptionError in words where the grid cannot serve. */
export function activityFrame(series: Series, options: OptionValues): ActivityFrame {
  const { grid, levels, times } = series;
  requireCircle(grid, "Equivalent latitudes");
  const hemispheres = sidesOf(options).map((side) => hemisphereRows(grid.lat, side));
  const band = (options.latitudes as readonly [number, number] | null) ?? [0, 90];
  const found = hemispheres.flatMap(({ rows, poleward }) =>
    Array.from(rows).filter((_, j) => poleward[j] >= band[0] - ROW_TOLERANCE && poleward[j] <= band[1] + ROW_TOLERANCE),
  );
  // The equator's row is one of both hemispheres.
  const rows = [...new Set(found)].sort((a, b) => a - b);
  if (rows.length === 0)
    throw new DataError(
      "OptionError",
      `latitudes: no row of the grid lies from ${band[0]}° to ${band[1]}°. Choose a wider range, or none for every row.`,
    );
  const absence = Uint8Array.from(rows, (row) =>
    Math.abs(grid.lat[row]) < ROW_TOLERANCE ? EQUATOR : isPole(Math.abs(grid.lat[row])) ? POLE : 0,
  );
  return {
    hemispheres,
    rows,
    absence,
    nLevel: levels?.length ?? 1,
    nLon: grid.lon.length,
    nTime: times[1] - times[0],
  };
}

/** Rows to read: whole hemispheres. */
export function planRows({ hemispheres }: ActivityFrame): readonly [from: number, to: number] {
  const rows = hemispheres.flatMap((hemisphere) => Array.from(hemisphere.rows));
  return [Math.min(...rows), Math.max(...rows) + 1];
}

export function activityCoordinates(series: Series, { rows }: ActivityFrame): Coordinate[] {
  const { grid, levels } = series;
  const time = timeCoordinate(series);
  const level: Coordinate[] =
    levels === null
      ? []
      : [
          {
            name: "level",
            values: levels,
            units: "hPa",
            attributes: { standard_name: "air_pressure", positive: "down" },
          },
        ];
  return [
    time,
    ...level,
    {
      name: "latitude",
      values: Float64Array.from(rows, (row) => grid.lat[row]),
      units: "degrees_north",
      attributes: { standard_name: "latitude", long_name: "equivalent latitude" },
    },
    {
      name: "longitude",
      values: grid.lon.slice(),
      units: "degrees_east",
      attributes: { standard_name: "longitude" },
    },
  ];
}
