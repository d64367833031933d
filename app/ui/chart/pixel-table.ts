import { rampColour, THEMES, type ThemeName } from "../theme/tokens.ts";
import type { ChartMap } from "./chart-map.ts";
import type { FineField } from "./fine-grid.ts";

/** For every pixel of a chart the cell of the fine grid it lies in and where within it; made once per view, size and grid. */
export interface PixelTable {
  readonly width: number;
  readonly height: number;
  /** Index of the cell's south-west point; −1 off the chart or off the grid. */
  readonly cell: Int32Array;
  /** Index of its south-east point. */
  readonly east: Int32Array;
  /** Share of the way east and north. */
  readonly dx: Float32Array;
  readonly dy: Float32Array;
}

/** @param density Pixels of the table per pixel of the drawing. */
export function pixelTable(map: ChartMap, field: FineField, density: number): PixelTable {
  const width = Math.round(map.width * density);
  const height = Math.round(map.height * density);
  const cell = new Int32Array(width * height).fill(-1);
  const east = new Int32Array(width * height);
  const dx = new Float32Array(width * height);
  const dy = new Float32Array(width * height);
  const { nLat, nLon, lat0, dLat, lon0, dLon, closesCircle } = field;
  for (let j = 0; j < height; j++) {
    for (let i = 0; i < width; i++) {
      const place = map.lonLat((i + 0.5) / density, (j + 0.5) / density);
      if (place === null) continue;
      const x = ((((place[0] - lon0) % 360) + 360) % 360) / dLon;
      // Half a row beyond the last is still its own: the pole of a grid without pole rows.
      const y = Math.min(nLat - 1, Math.max(0, (place[1] - lat0) / dLat));
      if (Math.abs((place[1] - lat0) / dLat - y) > 1) continue;
      const column = Math.floor(x);
      if (!closesCircle && column >= nLon - 1) continue;
      const row = Math.min(nLat - 2, Math.floor(y));
      const at = j * width + i;
      const c = column % nLon;
      cell[at] = row * nLon + c;
      east[at] = row * nLon + ((c + 1) % nLon);
      dx[at] = x - column;
      dy[at] = y - row;
    }
  }
  return { width, height, cell, east, dx, dy };
}

/** Colours of the ramp as bytes: 7 below, the sheet, 7 above. */
function rampBytes(theme: ThemeName): Uint8Array {
  const out = new Uint8Array(15 * 3);
  for (let band = -7; band <= 7; band++) {
    const colour = rampColour(band + 0.5 * Math.sign(band), 1, theme) ?? THEMES[theme].sheet;
    for (let part = 0; part < 3; part++)
      out[3 * (band + 7) + part] = Number.parseInt(colour.slice(1 + 2 * part, 3 + 2 * part), 16);
  }
  return out;
}

/** RGBA of the shading: stepped bands; missing values and what is off the chart stay clear. @returns Bytes, and whether any cell is masked. */
export function shadedPixels(
  table: PixelTable,
  field: FineField,
  step: number,
  theme: ThemeName,
  into: Uint8ClampedArray,
): boolean {
  const { cell, east, dx, dy } = table;
  const { values, nLon } = field;
  const bytes = rampBytes(theme);
  let masked = false;
  for (let at = 0, p = 0; at < cell.length; at++, p += 4) {
    const sw = cell[at] as number;
    if (sw < 0) {
      into[p + 3] = 0;
      continue;
    }
    const se = east[at] as number;
    const x = dx[at] as number;
    const y = dy[at] as number;
    const south = (values[sw] as number) * (1 - x) + (values[se] as number) * x;
    const north = (values[sw + nLon] as number) * (1 - x) + (values[se + nLon] as number) * x;
    const value = south * (1 - y) + north * y;
    if (Number.isNaN(value)) {
      masked = true;
      into[p + 3] = 0;
      continue;
    }
    const size = Math.min(7, Math.floor(Math.abs(value) / step));
    const from = 3 * (value < 0 ? 7 - size : 7 + size);
    into[p] = bytes[from] as number;
    into[p + 1] = bytes[from + 1] as number;
    into[p + 2] = bytes[from + 2] as number;
    into[p + 3] = 255;
  }
  return masked;
}
