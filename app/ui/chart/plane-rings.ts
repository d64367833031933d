import type { ChartMap } from "./chart-map.ts";
import { contourLines, type EvenField } from "./contour-lines.ts";
import type { FineField } from "./fine-grid.ts";
import { firstColumn, valueAt } from "./pixel-table.ts";

/** Far under every value: the ground outside the samples, so that every ring closes. */
const ABYSS = -1e30;
/** px beyond the map's edge that the samples reach; the clip cuts them off. */
const OVERLAP = 4;

/** Values of a field at evenly spaced points of the drawing; NaN where it is missing. */
export interface Plane {
  readonly values: Float32Array;
  readonly width: number;
  readonly height: number;
  readonly x0: number;
  readonly y0: number;
  readonly spacing: number;
}

export function sampledPlane(map: ChartMap, field: FineField, spacing: number): Plane {
  const x0 = map.box.x - OVERLAP;
  const y0 = map.box.y - OVERLAP;
  const width = Math.ceil((map.box.width + 2 * OVERLAP) / spacing) + 1;
  const height = Math.ceil((map.box.height + 2 * OVERLAP) / spacing) + 1;
  const values = new Float32Array(width * height).fill(Number.NaN);
  const shift = firstColumn(field, map.firstLon);
  for (let j = 0; j < height; j++)
    for (let i = 0; i < width; i++) {
      const [east, lat] = map.beyond(x0 + i * spacing, y0 + j * spacing);
      const position = (lat - field.lat0) / field.dLat;
      if (position < 0 || position > field.nLat - 1) continue;
      const row = Math.min(field.nLat - 2, Math.floor(position));
      values[j * width + i] = valueAt(field, row, position - row, east / field.dLon + shift);
    }
  return { values, width, height, x0, y0, spacing };
}

/** Closed outlines of one area, as x and y in turn; holes are rings too (fill them even-odd). */
export interface Rings {
  /** Number of the band: 1 … 7 above zero, −1 … −7 below; 0 is the missing. */
  readonly band: number;
  readonly rings: readonly Float64Array[];
}

/** Outlines of all that reaches at least band 1, 2 … 7, on either side of zero, from the least to the most. */
export function bandRings(plane: Plane, step: number): Rings[] {
  const out: Rings[] = [];
  for (const sign of [1, -1]) {
    const field = withAbyss(plane, (value) => (Number.isNaN(value) ? ABYSS : sign * value));
    const byBand = new Map<number, Float64Array[]>();
    for (const line of contourLines(field, step, 1, 7)) {
      const band = Math.round(line.level / step);
      const rings = byBand.get(band) ?? [];
      rings.push(onDrawing(plane, line.points));
      byBand.set(band, rings);
    }
    for (const [band, rings] of byBand) out.push({ band: sign * band, rings });
  }
  return out;
}

/** Outlines of what is missing on the map. */
export function missingRings(plane: Plane): readonly Float64Array[] {
  const field = withAbyss(plane, (value) => (Number.isNaN(value) ? 1.5 : 0.5));
  return contourLines(field, 1, 1, 1).map((line) => onDrawing(plane, line.points));
}

function withAbyss(plane: Plane, value: (sample: number) => number): EvenField {
  const nLon = plane.width + 2;
  const nLat = plane.height + 2;
  const values = new Float32Array(nLon * nLat).fill(ABYSS);
  for (let j = 0; j < plane.height; j++)
    for (let i = 0; i < plane.width; i++)
      values[(j + 1) * nLon + i + 1] = value(plane.values[j * plane.width + i] as number);
  return { values, nLat, nLon, lat0: -1, dLat: 1, lon0: -1, dLon: 1, closesCircle: false };
}

function onDrawing(plane: Plane, points: Float64Array): Float64Array {
  const out = new Float64Array(points.length);
  for (let i = 0; i < points.length; i += 2) {
    out[i] = plane.x0 + plane.spacing * (points[i] as number);
    out[i + 1] = plane.y0 + plane.spacing * (points[i + 1] as number);
  }
  return out;
}

/** px between the places where words may stand. */
const PLACE_SPACING = 12;
const MOST_PLACES = 60;

/**
 * Missing places on the map, the one nearest the middle of all of them first.
 *
 * @param width px of what is to be written there: its ends must be missing places, too.
 */
export function missingPlaces(
  map: ChartMap,
  plane: Plane,
  width = 0,
): readonly { readonly x: number; readonly y: number; readonly angle: 0 }[] {
  const places: { x: number; y: number; angle: 0 }[] = [];
  const isMissing = (x: number, y: number): boolean => {
    const i = Math.round((x - plane.x0) / plane.spacing);
    const j = Math.round((y - plane.y0) / plane.spacing);
    const isInside = i >= 0 && i < plane.width && j >= 0 && j < plane.height;
    return isInside && Number.isNaN(plane.values[j * plane.width + i] as number) && map.lonLat(x, y) !== null;
  };
  const stride = Math.max(1, Math.round(PLACE_SPACING / plane.spacing));
  for (let j = 0; j < plane.height; j += stride)
    for (let i = 0; i < plane.width; i += stride) {
      const x = plane.x0 + i * plane.spacing;
      const y = plane.y0 + j * plane.spacing;
      if (isMissing(x, y)) places.push({ x, y, angle: 0 });
    }
  const mean = (read: (place: { x: number; y: number }) => number): number =>
    places.reduce((sum, place) => sum + read(place), 0) / Math.max(1, places.length);
  const mx = mean(({ x }) => x);
  const my = mean(({ y }) => y);
  const roomy = places.filter(({ x, y }) => isMissing(x - width / 2, y) && isMissing(x + width / 2, y));
  return (roomy.length > 0 ? roomy : places)
    .sort((a, b) => Math.hypot(a.x - mx, a.y - my) - Math.hypot(b.x - mx, b.y - my))
    .slice(0, MOST_PLACES);
}
