import { rampColour, THEMES, type ThemeName } from "../theme/tokens.ts";
import type { ChartMap } from "./chart-map.ts";
import type { FineField } from "./fine-grid.ts";

/**
 * For every pixel of a map the row of the fine grid it lies in and how far east of the map's first longitude; made once per
 * size, hemisphere and grid. The chart may be turned without making it anew.
 */
export interface PixelTable {
  /** The map's box in pixels of the table. */
  readonly x0: number;
  readonly y0: number;
  readonly width: number;
  readonly height: number;
  /** Pixels that lie on the map and on the grid's rows. */
  readonly pixel: Int32Array;
  /** For each: index of the first value of the row south of it, share of the way to the next row, columns east of the map's first longitude. */
  readonly row: Int32Array;
  readonly dy: Float32Array;
  readonly east: Float32Array;
}

/** Half a pixel more than the map: its edge is cut by the clip, not by the table. */
const OVERLAP = 1;

/** @param density Pixels of the table per pixel of the drawing. */
export function pixelTable(map: ChartMap, field: FineField, density: number): PixelTable {
  const x0 = Math.floor((map.box.x - OVERLAP) * density);
  const y0 = Math.floor((map.box.y - OVERLAP) * density);
  const width = Math.ceil((map.box.x + map.box.width + OVERLAP) * density) - x0;
  const height = Math.ceil((map.box.y + map.box.height + OVERLAP) * density) - y0;
  const count = width * height;
  const pixel = new Int32Array(count);
  const row = new Int32Array(count);
  const dy = new Float32Array(count);
  const east = new Float32Array(count);
  const { nLat, nLon, lat0, dLat, dLon } = field;
  const reach = map.radius === 0 ? Number.POSITIVE_INFINITY : (map.radius + OVERLAP) ** 2;
  let n = 0;
  for (let j = 0; j < height; j++) {
    const y = (y0 + j + 0.5) / density;
    for (let i = 0; i < width; i++) {
      const x = (x0 + i + 0.5) / density;
      if ((x - map.cx) ** 2 + (y - map.cy) ** 2 > reach) continue;
      const [lon, lat] = map.beyond(x, y);
      const position = (lat - lat0) / dLat;
      if (position < 0 || position > nLat - 1) continue;
      const r = Math.min(nLat - 2, Math.floor(position));
      pixel[n] = j * width + i;
      row[n] = r * nLon;
      dy[n] = position - r;
      east[n] = lon / dLon;
      n += 1;
    }
  }
  return {
    x0,
    y0,
    width,
    height,
    pixel: pixel.slice(0, n),
    row: row.slice(0, n),
    dy: dy.slice(0, n),
    east: east.slice(0, n),
  };
}

/** Columns from the grid's first longitude to the map's. */
export function firstColumn(field: FineField, firstLon: number): number {
  return ((((firstLon - field.lon0) % 360) + 360) % 360) / field.dLon;
}

/** Bilinear value of a field, `column` anywhere on the circle; NaN beyond its ends and where a corner is missing. */
export function valueAt(field: FineField, row: number, dy: number, column: number): number {
  const { values, nLon, dLon, closesCircle } = field;
  const circle = 360 / dLon;
  const x = column >= circle ? column - circle : column;
  let west = Math.floor(x);
  if (west >= nLon) {
    if (!closesCircle) return Number.NaN;
    west = nLon - 1;
  }
  if (!closesCircle && west >= nLon - 1) return Number.NaN;
  const dx = x - west;
  const from = row * nLon;
  const east = west + 1 === nLon ? 0 : west + 1;
  const south = (values[from + west] as number) * (1 - dx) + (values[from + east] as number) * dx;
  const north = (values[from + nLon + west] as number) * (1 - dx) + (values[from + nLon + east] as number) * dx;
  return south * (1 - dy) + north * dy;
}

/** Colours of the ramp as RGBA words in the machine's byte order: 7 below, the sheet, 7 above. */
function rampWords(theme: ThemeName): Uint32Array {
  const words = new Uint32Array(15);
  const bytes = new Uint8Array(words.buffer);
  for (let band = -7; band <= 7; band++) {
    const colour = rampColour(band + 0.5 * Math.sign(band), 1, theme) ?? THEMES[theme].sheet;
    for (let part = 0; part < 3; part++)
      bytes[4 * (band + 7) + part] = Number.parseInt(colour.slice(1 + 2 * part, 3 + 2 * part), 16);
    bytes[4 * (band + 7) + 3] = 255;
  }
  return words;
}

/**
 * Stepped bands of a field, one RGBA word per pixel; what is missing or off the map stays clear.
 *
 * @param into width × height of the table, all clear.
 * @returns Whether anything on the map is missing.
 */
export function shadedPixels(
  table: PixelTable,
  field: FineField,
  firstLon: number,
  step: number,
  theme: ThemeName,
  into: Uint32Array,
): boolean {
  const { pixel, row, dy, east } = table;
  const { values, nLon, dLon, closesCircle } = field;
  const words = rampWords(theme);
  const shift = firstColumn(field, firstLon);
  const circle = 360 / dLon;
  const last = nLon - 1;
  const perStep = 1 / step;
  let isMasked = false;
  // valueAt() once more, without its calls: this loop is most of a picture's time.
  for (let n = 0; n < pixel.length; n++) {
    let x = (east[n] as number) + shift;
    if (x >= circle) x -= circle;
    let west = x | 0;
    if (west >= last) {
      if (!closesCircle) {
        isMasked = true;
        continue;
      }
      if (west > last) west = last;
    }
    const dx = x - west;
    const sw = (row[n] as number) + west;
    const se = west === last ? sw - last : sw + 1;
    const a = values[sw] as number;
    const b = values[sw + nLon] as number;
    const south = a + ((values[se] as number) - a) * dx;
    const value = (south + (b + ((values[se + nLon] as number) - b) * dx - south) * (dy[n] as number)) * perStep;
    if (value >= 1) into[pixel[n] as number] = words[value >= 7 ? 14 : 7 + (value | 0)] as number;
    else if (value <= -1) into[pixel[n] as number] = words[value <= -7 ? 0 : 7 + (value | 0)] as number;
    else if (!Number.isNaN(value)) into[pixel[n] as number] = words[7] as number;
    else isMasked = true;
  }
  return isMasked;
}
