import { DataError } from "../../errors.ts";
import type { IndexRange } from "../../field/axes.ts";
import { requireCircle } from "../../grid/circle.ts";
import type { OptionValues, Series } from "../entry.ts";
import {
  latitudeText,
  type ReversalAngles,
  type Reversals,
  ROW_TOLERANCE,
  reversals,
  type Side,
} from "./block-rows.ts";

export type BlockIndex = "one-dimensional" | "two-dimensional" | "anomaly";

/** One hemisphere: rows run from the equator poleward on either side, so that a mirrored field gives mirrored blocks. */
export interface Lane {
  readonly side: Side;
  /** Rows of the grid on which cells lie; the one-dimensional index has one, its central latitude's. */
  readonly rows: Int32Array;
  /** null for the anomaly index. */
  readonly reversals: Reversals | null;
}

/** The options of blocking, typed, with what follows from them. */
export interface BlockChoice {
  readonly index: BlockIndex;
  /** Northern first. */
  readonly lanes: readonly Lane[];
  /** Rows to read. */
  readonly rows: IndexRange;
  readonly equatorwardGradient: number;
  readonly polewardGradient: number;
  readonly subtropicalGradient: number;
  readonly threshold: number;
  /** 1 for highs, −1 for lows. */
  readonly sign: 1 | -1;
  readonly persistence: number;
  /** Columns that a block of an event has at least. */
  readonly leastColumns: number;
  readonly leastOverlap: number;
  readonly leastDays: number;
  readonly gapSteps: number;
  /** Columns up and downstream in which troughs are looked for. */
  readonly reach: number;
}

const SIDES: Readonly<Record<string, readonly Side[]>> = { north: [1], south: [-1], both: [1, -1] };

/** Hemispheres of the option, northern first. */
export function sidesOf(options: OptionValues): readonly Side[] {
  return SIDES[options.hemisphere as string];
}

function oneDimension(options: OptionValues): ReversalAngles[] {
  const offsets = options.offsets as readonly number[] | null;
  const north = options.poleward_latitude as number;
  const centre = options.central_latitude as number;
  const south = options.equatorward_latitude as number;
  if (!(north > centre && centre > south))
    throw new DataError(
      "OptionError",
      `poleward_latitude, central_latitude and equatorward_latitude must fall in this order; they are ${north}°, ${centre}° and ${south}°.`,
    );
  if (offsets?.length === 0)
    throw new DataError("OptionError", "offsets: the list is empty. Name one at least; [0] for the latitudes alone.");
  return (offsets ?? [0]).map((offset) => ({
    poleward: north + offset,
    centre: centre + offset,
    equatorward: south + offset,
    subtropical: null,
    why: `${north}°, ${centre}° and ${south}° with the offset ${offset}°`,
  }));
}

/** Rows of a hemisphere within [from, to] degrees poleward, ends included, from the equator poleward. */
function rowsBetween(lat: Float64Array, side: Side, from: number, to: number): number[] {
  const rows = Array.from(lat.keys()).filter(
    (row) => side * lat[row] >= from - ROW_TOLERANCE && side * lat[row] <= to + ROW_TOLERANCE,
  );
  return side === 1 ? rows : rows.reverse();
}

function requireRows(rows: readonly number[], lat: Float64Array, side: Side, from: number, to: number): void {
  if (rows.length > 0) return;
  throw new DataError(
    "GridError",
    `Blocking needs rows from ${latitudeText(side * from)} to ${latitudeText(side * to)}, and the grid's rows run from ${latitudeText(lat[0])} to ${latitudeText(lat[lat.length - 1])}. Use a field that reaches there, or the other hemisphere.`,
  );
}

function laneOf(series: Series, options: OptionValues, index: BlockIndex, side: Side): Lane {
  const { lat } = series.grid;
  if (index === "one-dimensional") {
    const found = reversals(lat, side, oneDimension(options));
    // Cells lie on the row that stands for φ0 itself: of the offset nearest to 0.
    const offsets = (options.offsets as readonly number[] | null) ?? [0];
    const least = offsets.reduce((best, offset, i) => (Math.abs(offset) < Math.abs(offsets[best]) ? i : best), 0);
    return { side, rows: Int32Array.of(found.centre[least]), reversals: found };
  }
  if (index === "anomaly") {
    const least = options.least_latitude as number;
    const rows = rowsBetween(lat, side, least, 90);
    requireRows(rows, lat, side, least, 90);
    return { side, rows: Int32Array.from(rows), reversals: null };
  }
  const [from, to] = options.latitudes as readonly [number, number];
  const span = options.span as number;
  const rows = rowsBetween(lat, side, from, to);
  requireRows(rows, lat, side, from, to);
  // A grid that ends inside the central latitudes would leave the rest unsaid.
  for (const end of [from, to]) {
    const nearest = rows.reduce((best, row) => Math.min(best, Math.abs(side * lat[row] - end)), 90);
    const spacing = lat.length > 1 ? (lat[lat.length - 1] - lat[0]) / (lat.length - 1) : 0;
    if (nearest > spacing + ROW_TOLERANCE) requireRows([], lat, side, from, to);
  }
  const angles = rows.map((row): ReversalAngles => {
    const centre = side * lat[row];
    return {
      poleward: centre + span,
      centre,
      equatorward: centre - span,
      subtropical: options.subtropical_condition === true ? centre - 2 * span : null,
      why: `${span}° steps from the central row ${latitudeText(lat[row])}`,
    };
  });
  return { side, rows: Int32Array.from(rows), reversals: reversals(lat, side, angles) };
}

function rowRange(lanes: readonly Lane[]): IndexRange {
  let from = Number.POSITIVE_INFINITY;
  let to = 0;
  for (const { rows, reversals: found } of lanes)
    for (const list of [rows, found?.poleward, found?.centre, found?.equatorward, found?.subtropical])
      for (const row of list ?? []) {
        from = Math.min(from, row);
        to = Math.max(to, row + 1);
      }
  return [from, to];
}

/** @throws OptionError or GridError in words where the grid or the series cannot serve the options. */
export function blockChoice(series: Series, options: OptionValues): BlockChoice {
  const { grid, levels, background } = series;
  requireCircle(grid, "Blocks");
  if (levels !== null && levels.length > 1)
    throw new DataError(
      "OptionError",
      `Blocking is told from one level, and ${levels.length} are selected: ${levels.join(", ")} hPa. Name one in "level"; 500 is usual.`,
    );
  const index = options.index as BlockIndex;
  if (index === "anomaly" && background.kind === "none")
    throw new DataError(
      "OptionError",
      'index: "anomaly" needs a background to depart from. State one in the recipe: an annual cycle, a running mean, or "record-mean", the record\'s own time mean.',
    );
  const lanes = sidesOf(options).map((side) => laneOf(series, options, index, side));
  const nLon = grid.lon.length;
  const spacing = 360 / nLon;
  return {
    index,
    lanes,
    rows: rowRange(lanes),
    equatorwardGradient: options.equatorward_gradient as number,
    polewardGradient: options.poleward_gradient as number,
    subtropicalGradient: options.subtropical_gradient as number,
    threshold: options.threshold as number,
    sign: options.sign === "negative" ? -1 : 1,
    persistence: options.persistence as number,
    leastColumns: Math.ceil((options.least_width as number) / spacing - ROW_TOLERANCE),
    leastOverlap: options.least_overlap as number,
    leastDays: options.least_days as number,
    gapSteps: options.gap_steps as number,
    reach: Math.min(
      Math.max(1, Math.floor((options.trough_reach as number) / spacing + ROW_TOLERANCE)),
      Math.floor(nLon / 2),
    ),
  };
}
