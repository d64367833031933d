import type { StepAxis } from "../../field/axes.ts";
import type { Series } from "../entry.ts";

/** A record is broken where its steps lie further apart than this many usual steps. */
const WIDEST_STEP = 1.5;
/** Days: a tenth of a second; times are stored to about that. */
export const DAY_TOLERANCE = 1e-6;

/** How the selected steps follow each other in time. */
export interface RecordPieces {
  /** Days since 1970 of each selected step; null on an axis that is no time. */
  readonly days: Float64Array | null;
  /** The usual step, days: the median (of two, the smaller); NaN where there is none. */
  readonly usual: number;
  /** 1 at each step that begins a piece: the first, and those after a gap of over 1.5 usual steps. */
  readonly begins: Uint8Array;
  /** How many gaps there are. */
  readonly gaps: number;
}

/** Find the usual step of the selected steps, and where the record is broken. */
export function recordPieces(series: Series): RecordPieces {
  const [from, to] = series.times;
  return piecesOf(series.steps, from, to);
}

function piecesOf(steps: StepAxis, from: number, to: number): RecordPieces {
  const n = to - from;
  const begins = new Uint8Array(n);
  if (n > 0) begins[0] = 1;
  if (steps.kind !== "time") return { days: null, usual: Number.NaN, begins, gaps: 0 };
  const days = steps.values.slice(from, to);
  if (n < 2) return { days, usual: Number.NaN, begins, gaps: 0 };
  const lengths = new Float64Array(n - 1);
  for (let t = 1; t < n; t++) lengths[t - 1] = days[t] - days[t - 1];
  const usual = lengths.slice().sort()[(n - 2) >> 1];
  let gaps = 0;
  for (let t = 1; t < n; t++)
    if (lengths[t - 1] > WIDEST_STEP * usual + DAY_TOLERANCE) {
      begins[t] = 1;
      gaps += 1;
    }
  return { days, usual, begins, gaps };
}

/** Days from one step to another, both counted. */
export function inclusiveDays({ days, usual }: RecordPieces, first: number, last: number): number {
  return days === null ? Number.NaN : days[last] - days[first] + usual;
}

/**
 * How many steps on either side of a step tell whether it belongs to a run of at least `least` days: the most that it takes,
 * over the record, from a step onward or back until the days are full.
 */
export function stepsWithin(pieces: RecordPieces, least: number): number {
  const { days, usual } = pieces;
  if (days === null || Number.isNaN(usual)) return 0;
  const n = days.length;
  let most = 0;
  for (let first = 0, last = 0; first < n; first++) {
    last = Math.max(last, first);
    while (last < n && inclusiveDays(pieces, first, last) < least - DAY_TOLERANCE) last += 1;
    if (last === n) break;
    most = Math.max(most, last - first);
  }
  for (let last = n - 1, first = n - 1; last >= 0; last--) {
    first = Math.min(first, last);
    while (first >= 0 && inclusiveDays(pieces, first, last) < least - DAY_TOLERANCE) first -= 1;
    if (first < 0) break;
    most = Math.max(most, last - first);
  }
  return most;
}
