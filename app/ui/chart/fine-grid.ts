import type { EvenField } from "./contour-lines.ts";
import type { ChartGrid } from "./types.ts";

/** A field on a grid fine enough to be drawn smoothly: one hemisphere, pole included. */
export type FineField = EvenField;

/** Degrees; a finer grid would not be seen. */
const FINE_ENOUGH = 0.8;
/** Degrees from the equator to the first row: somewhat beyond both charts. */
const FIRST_LATITUDE = 9;
/** A pole that the grid does not reach is filled in if its last row is within this many spacings. */
const POLE_IS_NEAR = 1.6;

function meanSpacing(axis: Float64Array): number {
  return axis.length > 1 ? Math.abs((axis[axis.length - 1] as number) - (axis[0] as number)) / (axis.length - 1) : 1;
}

/**
 * Value between `b` and `c` by the cubic through both with the slopes of their neighbours (Catmull & Rom 1974); a straight
 * line where a neighbour is missing, so that a missing value spreads no further than its own cells.
 *
 * @param t Share of the way from b to c.
 * @param before,after Spacings b − a and d − c in units of c − b; 0 at an end, where a is b or d is c and the slope is one-sided.
 */
function between(a: number, b: number, c: number, d: number, t: number, before: number, after: number): number {
  if (t === 0) return b;
  const first = (c - a) / (1 + before);
  const last = (d - b) / (1 + after);
  const t2 = t * t;
  const t3 = t2 * t;
  const value = (2 * t3 - 3 * t2 + 1) * b + (t3 - 2 * t2 + t) * first + (3 * t2 - 2 * t3) * c + (t3 - t2) * last;
  return Number.isNaN(value) ? b + (c - b) * t : value;
}

/** The rows of `grid` that a hemisphere's drawing needs, made finer along longitude. */
function refinedRows(
  grid: ChartGrid,
  values: Float32Array,
  rows: readonly number[],
  factor: number,
  wide: number,
): Float32Array {
  const nLon = grid.lon.length;
  const out = new Float32Array(rows.length * wide);
  const column = grid.closesCircle
    ? (i: number): number => (i + nLon) % nLon
    : (i: number): number => Math.min(nLon - 1, Math.max(0, i));
  rows.forEach((row, r) => {
    const from = row * nLon;
    const into = r * wide;
    for (let i = 0; i * factor < wide; i++) {
      const a = values[from + column(i - 1)] as number;
      const b = values[from + i] as number;
      const c = values[from + column(i + 1)] as number;
      const d = values[from + column(i + 2)] as number;
      const [before, after] = grid.closesCircle ? [1, 1] : [Math.min(1, i), Math.min(1, Math.max(0, nLon - 2 - i))];
      for (let f = 0; f < factor && i * factor + f < wide; f++)
        out[into + i * factor + f] = between(a, b, c, d, f / factor, before, after);
    }
  });
  return out;
}

function rowMean(values: Float32Array, from: number, count: number): number {
  let sum = 0;
  let present = 0;
  for (let i = from; i < from + count; i++) {
    const value = values[i] as number;
    if (Number.isNaN(value)) continue;
    sum += value;
    present += 1;
  }
  return present === 0 ? Number.NaN : sum / present;
}

/**
 * A hemisphere of a field between its points: cubic curves, first along longitude, then along latitude, onto even rows that
 * end at the pole. Rows may be unevenly spaced (Gaussian). A grid without a row at the pole gets one, the mean of its last.
 *
 * @param values (nLat, nLon); NaN is missing. Not modified.
 * @param north 1 for the northern hemisphere, −1 for the southern.
 */
export function fineField(grid: ChartGrid, values: Float32Array, north: 1 | -1): FineField {
  const { lat, lon } = grid;
  const dLonOwn = lon.length > 1 ? ((lon[lon.length - 1] as number) - (lon[0] as number)) / (lon.length - 1) : 360;
  const factor = Math.max(1, Math.ceil(dLonOwn / FINE_ENOUGH));
  const wide = grid.closesCircle ? lon.length * factor : (lon.length - 1) * factor + 1;
  const spacing = meanSpacing(lat);
  const rows: number[] = [];
  for (let r = 0; r < lat.length; r++) if (north * (lat[r] as number) > FIRST_LATITUDE - 2.5 * spacing) rows.push(r);
  const own = refinedRows(grid, values, rows, factor, wide);
  const axis = rows.map((r) => lat[r] as number);

  const fineSpacing = spacing / Math.max(1, Math.ceil(spacing / FINE_ENOUGH));
  const nLat = Math.round((90 - FIRST_LATITUDE) / fineSpacing) + 1;
  const dLat = (90 - FIRST_LATITUDE) / (nLat - 1);
  const lat0 = north > 0 ? FIRST_LATITUDE : -90;
  const out = new Float32Array(nLat * wide).fill(Number.NaN);
  const field = {
    values: out,
    nLat,
    nLon: wide,
    lat0,
    dLat,
    lon0: lon[0] as number,
    dLon: dLonOwn / factor,
    closesCircle: grid.closesCircle,
  };
  if (axis.length === 0) return field;

  const outermost = north > 0 ? axis.length - 1 : 0;
  const gap = 90 - Math.abs(axis[outermost] as number);
  const pole = gap > 1e-6 && gap < POLE_IS_NEAR * spacing ? rowMean(own, outermost * wide, wide) : Number.NaN;
  const hasPole = !Number.isNaN(pole);
  // Positions along latitude, with the pole's own where it was added.
  const at = hasPole ? (north > 0 ? [...axis, 90] : [-90, ...axis]) : axis;
  const shift = hasPole && north < 0 ? 1 : 0;
  const value = (row: number, column: number): number => {
    const held = row - shift;
    return held < 0 || held >= axis.length ? pole : (own[held * wide + column] as number);
  };
  let b = 0;
  for (let j = 0; j < nLat; j++) {
    const here = Math.max(-90, Math.min(90, lat0 + j * dLat));
    const first = at[0] as number;
    const last = at[at.length - 1] as number;
    if (here < first - 1e-6 || here > last + 1e-6) continue;
    while (b + 2 < at.length && (at[b + 1] as number) <= here) b++;
    if (at.length === 1) {
      for (let i = 0; i < wide; i++) out[j * wide + i] = value(0, i);
      continue;
    }
    const low = at[b] as number;
    const span = (at[b + 1] as number) - low;
    const t = Math.max(0, Math.min(1, (here - low) / span));
    const share = t < 1e-6 ? 0 : t;
    const [before, after] = [Math.max(0, b - 1), Math.min(at.length - 1, b + 2)];
    const spanBefore = before === b ? 0 : (low - (at[before] as number)) / span;
    const spanAfter = after === b + 1 ? 0 : ((at[after] as number) - (at[b + 1] as number)) / span;
    const isLast = share > 1 - 1e-6;
    for (let i = 0; i < wide; i++)
      out[j * wide + i] = isLast
        ? value(b + 1, i)
        : between(value(before, i), value(b, i), value(b + 1, i), value(after, i), share, spanBefore, spanAfter);
  }
  return field;
}
