import { RADIANS_PER_DEGREE } from "../constants.ts";
import { DataError } from "../errors.ts";
import type { IndexRange } from "../field/axes.ts";

/** Slack for "ends included": float32 storage moves a latitude by at most 4e-6°. */
const LAT_TOLERANCE = 1e-4;

/**
 * Area weight of each row: sin φ(north edge) − sin φ(south edge).
 *
 * Edges lie midway between rows. Beyond the last row the edge is the pole where the pole is nearer than one row spacing,
 * else half a spacing on, so that a regional grid's end rows weigh like their neighbours.
 *
 * @param lat Degrees, south → north.
 */
export function rowWeights(lat: Float64Array): Float64Array {
  const n = lat.length;
  const weights = new Float64Array(n);
  if (n === 1) return weights.fill(1);
  const edge = (i: number): number => {
    if (i > 0 && i < n) return ((lat[i - 1] as number) + (lat[i] as number)) / 2;
    const outer = i === 0 ? (lat[0] as number) : (lat[n - 1] as number);
    const inner = i === 0 ? (lat[1] as number) : (lat[n - 2] as number);
    const spacing = Math.abs(outer - inner);
    const pole = i === 0 ? -90 : 90;
    // With slack, so that a last row just one spacing from the pole weighs the same however it was stored.
    return Math.abs(pole - outer) < spacing - LAT_TOLERANCE ? pole : outer + (outer - inner) / 2;
  };
  for (let i = 0; i < n; i++)
    weights[i] = Math.sin(edge(i + 1) * RADIANS_PER_DEGREE) - Math.sin(edge(i) * RADIANS_PER_DEGREE);
  return weights;
}

/** The row nearest to a latitude; of two equally near, the one nearer the equator. */
export function nearestRow(lat: Float64Array, latitude: number): number {
  let best = 0;
  for (let i = 1; i < lat.length; i++) {
    const here = Math.abs((lat[i] as number) - latitude);
    const held = Math.abs((lat[best] as number) - latitude);
    const tie = Math.abs(here - held) <= LAT_TOLERANCE;
    if (tie ? Math.abs(lat[i] as number) < Math.abs(lat[best] as number) : here < held) best = i;
  }
  return best;
}

/** The column nearest to a longitude, round the circle; of two equally near, the western. */
export function nearestColumn(lon: Float64Array, longitude: number): number {
  let best = 0;
  let nearest = Number.POSITIVE_INFINITY;
  for (let i = 0; i < lon.length; i++) {
    const east = (((((lon[i] as number) - longitude + 180) % 360) + 360) % 360) - 180;
    const gain = Math.abs(nearest) - Math.abs(east);
    if (gain > LAT_TOLERANCE || (gain >= -LAT_TOLERANCE && east < nearest)) {
      nearest = east;
      best = i;
    }
  }
  return best;
}

/**
 * The rows whose centres lie in a band, ends included; equal ends mean the nearest row.
 *
 * @throws GridError if the band holds no row, or a single latitude is off the grid by more than a row.
 */
export function rowsOfBand(lat: Float64Array, band: readonly [number, number]): IndexRange {
  const [south, north] = band;
  const first = lat[0] as number;
  const last = lat[lat.length - 1] as number;
  const covers = `The grid's rows run from ${first.toFixed(2)}° to ${last.toFixed(2)}°N.`;
  if (south === north) {
    const row = nearestRow(lat, south);
    const spacing = lat.length > 1 ? (last - first) / (lat.length - 1) : 180;
    if (Math.abs((lat[row] as number) - south) > spacing + LAT_TOLERANCE)
      throw new DataError("GridError", `There is no row near ${south}°N. ${covers} Choose a latitude on the grid.`);
    return [row, row + 1];
  }
  let from = 0;
  // Turned round so that a band with an end of NaN holds no row.
  while (from < lat.length && !((lat[from] as number) >= south - LAT_TOLERANCE)) from += 1;
  let to = from;
  while (to < lat.length && (lat[to] as number) <= north + LAT_TOLERANCE) to += 1;
  if (from === to)
    throw new DataError(
      "GridError",
      `The band ${south}° to ${north}°N holds no row. ${covers} Choose a wider band, or one on the grid.`,
    );
  return [from, to];
}
