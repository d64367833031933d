import { rowCoefficients } from "../../../core/diagnostics/waves/coefficients.ts";
import { sharesAt } from "../../../core/diagnostics/waves/wave-extras.ts";
import type { Grid } from "../../../core/field/axes.ts";
import { nearestColumn, nearestRow } from "../../../core/grid/rows.ts";
import type { Frame } from "../../worker/desk.ts";
import { MOST_WAVES } from "../case/wave-recipe.ts";
import { presentMean } from "./departures.ts";

/** The numbers at the cursor's grid point. */
export interface CursorReading {
  readonly lat: number;
  readonly lon: number;
  readonly value: number;
  /** Departure from the background; NaN where there is none. */
  readonly anomaly: number;
  /** What the bars add up to: the anomaly, or without a background the departure from the zonal mean. */
  readonly sum: number;
  /** Whether `sum` departs from the background or from the zonal mean. */
  readonly of: "background" | "zonal-mean";
  /** Share of each wave k 0 … 8, then of all shorter ones together; null where the row has no waves. */
  readonly shares: Float64Array | null;
  /** Why there are no shares, in words. */
  readonly whyNot: string | null;
}

/** What stands at the grid point nearest to the cursor, and what each wave of its row adds to it. */
export function cursorReading(frame: Frame, grid: Grid, lat: number, lon: number): CursorReading {
  const row = nearestRow(grid.lat, lat);
  const column = nearestColumn(grid.lon, lon);
  const nLon = grid.lon.length;
  const at = row * nLon + column;
  const value = frame.values[at];
  const departures = new Float64Array(nLon);
  for (let i = 0; i < nLon; i++)
    departures[i] = frame.values[row * nLon + i] - (frame.background === null ? 0 : frame.background[row * nLon + i]);
  if (frame.background === null) {
    const mean = presentMean(departures);
    for (let i = 0; i < nLon; i++) departures[i] -= mean;
  }
  const sum = departures[column];
  const waves = Math.min(MOST_WAVES, Math.floor(nLon / 2));
  const reading = {
    lat: grid.lat[row],
    lon: grid.lon[column],
    value,
    anomaly: frame.background === null ? Number.NaN : sum,
    sum,
    of: frame.background === null ? ("zonal-mean" as const) : ("background" as const),
  };
  if (!grid.closesCircle)
    return {
      ...reading,
      shares: null,
      whyNot: "This grid does not close the circle of longitude, so its rows have no waves.",
    };
  if (departures.some(Number.isNaN))
    return {
      ...reading,
      shares: null,
      whyNot: "The cursor's row misses a value, so it has no waves. Move the cursor.",
    };
  const { c } = rowCoefficients(departures, grid.lon, waves);
  return { ...reading, shares: sharesAt(c, 0, grid.lon[column], sum, waves, nLon), whyNot: null };
}
