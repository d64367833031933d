import { RADIANS_PER_DEGREE } from "../../constants.ts";
import type { IndexRange } from "../../field/axes.ts";
import type { BlockChoice, Lane } from "./block-choice.ts";
import { DAY_TOLERANCE, inclusiveDays, type RecordPieces } from "./record-pieces.ts";
import { BLOCKED, FREE, UNKNOWN } from "./reversal.ts";

/** Heights and their background, grid row r of step s at `(s · rows + r − first) · nLon`. */
export interface Departures {
  readonly field: Float64Array;
  readonly background: Float64Array;
  readonly nRow: number;
  /** Grid row of the slab's first row. */
  readonly first: number;
  readonly nLon: number;
}

/** sin 45°/sin φ of each row of a lane: a departure times this is that of 45° with the same geostrophic vorticity. */
function latitudeFactors(lat: Float64Array, { rows, side }: Lane): Float64Array {
  return Float64Array.from(
    rows,
    (row) => Math.sin(45 * RADIANS_PER_DEGREE) / Math.sin(side * lat[row] * RADIANS_PER_DEGREE),
  );
}

/**
 * Dole & Gordon 1983 (Mon. Wea. Rev. 111, 1567): a cell is blocked at the steps of a run, `persistence` days long at least, in
 * which Z′ · sin 45°/sin φ lies above the threshold (or below minus the threshold) at every step. A gap in the record and a
 * missing value end a run. On an axis that is no time every step stands for itself.
 *
 * @param steps Steps that `departures` hold, counted from the first that the recipe selects; those outside are left out.
 * @returns States of those steps, shape (steps within the selection, rows of the lane, nLon), and the first step's number.
 */
export function persistentStates(
  departures: Departures,
  lat: Float64Array,
  lane: Lane,
  choice: BlockChoice,
  pieces: RecordPieces,
  steps: IndexRange,
): { readonly states: Uint8Array; readonly from: number } {
  const { field, background, nRow, first, nLon } = departures;
  const factors = latitudeFactors(lat, lane);
  const from = Math.max(0, steps[0]);
  const to = Math.min(pieces.begins.length, steps[1]);
  const cells = lane.rows.length * nLon;
  const states = new Uint8Array((to - from) * cells);
  const { sign, threshold, persistence } = choice;
  for (let t = from; t < to; t++)
    for (let j = 0; j < lane.rows.length; j++) {
      const source = ((t - steps[0]) * nRow + lane.rows[j] - first) * nLon;
      const into = (t - from) * cells + j * nLon;
      const factor = sign * factors[j];
      for (let i = 0; i < nLon; i++) {
        const departure = (field[source + i] - background[source + i]) * factor;
        states[into + i] = departure > threshold ? BLOCKED : Number.isNaN(departure) ? UNKNOWN : FREE;
      }
    }
  const { days, usual } = pieces;
  if (days === null || Number.isNaN(usual) || persistence <= usual + DAY_TOLERANCE) return { states, from };
  // Where the run under way in each cell began; −1 for none.
  const began = new Int32Array(cells).fill(-1);
  for (let t = from; t <= to; t++) {
    const isCut = t === to || pieces.begins[t] === 1;
    const row = (t - from) * cells;
    for (let c = 0; c < cells; c++) {
      const isOn = t < to && states[row + c] === BLOCKED;
      const start = began[c];
      if (start >= 0 && (isCut || !isOn)) {
        if (inclusiveDays(pieces, start, t - 1) < persistence - DAY_TOLERANCE)
          for (let s = start; s < t; s++) states[(s - from) * cells + c] = FREE;
        began[c] = -1;
      }
      if (isOn && began[c] < 0) began[c] = t;
    }
  }
  return { states, from };
}
