import { FONT, THEMES, type ThemeName } from "../theme/tokens.ts";
import { type ChartMap, chartMap } from "./chart-map.ts";
import { type ContourLine, contourLines } from "./contour-lines.ts";
import { contourLabels, drawContours, insideMap } from "./draw-contours.ts";
import { drawCoast, drawFrame, drawGraticule, drawGraticuleNames, drawLand, outline } from "./draw-ground.ts";
import { drawBand, drawCursor, drawLabels, drawRim, drawTexts } from "./draw-marks.ts";
import { extrema } from "./extrema.ts";
import { type FineField, fineField } from "./fine-grid.ts";
import { labelBox, placedLabels, type WantedLabel } from "./labels.ts";
import type { Pen, PixelPicture } from "./pen.ts";
import { type PixelTable, pixelTable, shadedPixels } from "./pixel-table.ts";
import type { ChartGrid, ChartLayers, ChartView } from "./types.ts";

/** Room round the map for captions, keys, frame and rim. */
function margins(view: ChartView): { top: number; right: number; bottom: number; left: number } {
  return view.kind === "hemisphere"
    ? { top: 48, right: 44, bottom: 48, left: 44 }
    : { top: 48, right: 14, bottom: 66, left: 46 };
}

export function mapFor(view: ChartView, width: number, height: number): ChartMap {
  return chartMap(view, width, height, margins(view));
}

/** What a chart keeps from one picture to the next: the table of its view, and the lines and pixels of its fields. */
export class ChartMemory {
  #table: { key: string; table: PixelTable } | null = null;
  #shade: { values: Float32Array; key: string; picture: PixelPicture; masked: boolean } | null = null;
  #lines: { values: Float32Array; interval: number; lines: ContourLine[] } | null = null;
  readonly #canvas: (width: number, height: number) => HTMLCanvasElement;
  readonly #density: number;

  /** @param density Pixels of the shading per pixel of the drawing. */
  constructor(canvas: (width: number, height: number) => HTMLCanvasElement, density: number) {
    this.#canvas = canvas;
    this.#density = density;
  }

  lines(grid: ChartGrid, values: Float32Array, interval: number): ContourLine[] {
    if (this.#lines?.values !== values || this.#lines.interval !== interval)
      this.#lines = { values, interval, lines: contourLines(fineField(grid, values), interval) };
    return this.#lines.lines;
  }

  #tableFor(map: ChartMap, field: FineField): PixelTable {
    const key = JSON.stringify([
      map.view,
      map.width,
      map.height,
      field.nLat,
      field.nLon,
      field.lat0,
      field.lon0,
      field.closesCircle,
    ]);
    if (this.#table?.key !== key) this.#table = { key, table: pixelTable(map, field, this.#density) };
    return this.#table.table;
  }

  shade(
    map: ChartMap,
    grid: ChartGrid,
    values: Float32Array,
    step: number,
    theme: ThemeName,
  ): { picture: PixelPicture; masked: boolean } {
    const key = JSON.stringify([map.view, map.width, map.height, step, theme]);
    if (this.#shade?.values === values && this.#shade.key === key) return this.#shade;
    const field = fineField(grid, values);
    const table = this.#tableFor(map, field);
    const canvas = this.#canvas(table.width, table.height);
    const context = canvas.getContext("2d") as CanvasRenderingContext2D;
    const image = context.createImageData(table.width, table.height);
    const masked = shadedPixels(table, field, step, theme, image.data);
    context.putImageData(image, 0, 0);
    this.#shade = { values, key, picture: { canvas, dataUrl: () => canvas.toDataURL("image/png") }, masked };
    return this.#shade;
  }
}

/** Dots where there is no value, under the shading. */
function stipple(pen: Pen, map: ChartMap, colour: string): void {
  pen.save();
  outline(pen, map);
  pen.clip();
  pen.fillStyle = colour;
  pen.beginPath();
  for (let y = map.box.y; y < map.box.y + map.box.height; y += 5)
    for (let x = map.box.x + (Math.round(y / 5) % 2) * 2.5; x < map.box.x + map.box.width; x += 5) {
      pen.moveTo(x + 0.8, y);
      pen.arc(x, y, 0.8, 0, 2 * Math.PI);
    }
  pen.fill();
  pen.restore();
}

/** Draw the whole chart; everything it shows is in `view` and `layers`. */
export function drawChart(
  pen: Pen,
  view: ChartView,
  layers: ChartLayers,
  theme: ThemeName,
  width: number,
  height: number,
  memory: ChartMemory,
): void {
  const tokens = THEMES[theme];
  const map = mapFor(view, width, height);
  const north = view.hemisphere === "north" ? 1 : -1;
  outline(pen, map);
  pen.fillStyle = tokens.sheet;
  pen.fill();
  const { shading, contours, grid } = layers;
  let masked = false;
  if (shading !== null) {
    const shade = memory.shade(map, grid, shading.values, shading.step, theme);
    masked = shade.masked;
    if (masked) stipple(pen, map, tokens.rule2);
    pen.save();
    outline(pen, map);
    pen.clip();
    pen.picture(shade.picture, 0, 0, width, height);
    pen.restore();
  }
  drawLand(pen, map, tokens);
  drawGraticule(pen, map, tokens);
  drawCoast(pen, map, tokens);
  const lines = contours === null ? [] : memory.lines(grid, contours.values, contours.interval);
  if (contours !== null) drawContours(pen, map, lines, contours.interval, contours.boldEach, tokens);
  drawGraticuleNames(pen, map, tokens);
  drawBand(pen, map, layers.band, tokens);
  drawFrame(pen, map, tokens);

  // Labels: the extremes first, then the lines' numbers, clear of the cursor and of the meridians' names.
  const wanted: WantedLabel[] = [];
  pen.save();
  pen.font = `640 13px ${FONT}`;
  const peaks = shading === null ? [] : extrema(grid, shading.values, 2 * shading.step, north, 8);
  for (const peak of peaks) {
    const [x, y] = map.xy(peak.lon, peak.lat);
    const digits = shading !== null && shading.step < 2 ? 1 : 0;
    const text = `${peak.value < 0 ? "−" : "+"}${Math.abs(peak.value).toFixed(digits)}`;
    wanted.push({ text, width: pen.measureText(text).width + 4, height: 14, places: [{ x, y, angle: 0 }] });
  }
  pen.restore();
  if (contours !== null) wanted.push(...contourLabels(pen, map, lines, contours.interval, contours.boldEach));
  const [cx, cy] = map.xy(layers.cursor.lon, layers.cursor.lat);
  const taken = [labelBox({ x: cx, y: cy, angle: 0 }, 26, 26)];
  if (view.kind === "hemisphere")
    for (const lat of [40, 60, 80]) {
      const [x, y] = map.xy(view.turn + 172, north * lat);
      taken.push(labelBox({ x, y, angle: 0 }, 30, 13));
    }
  const placed = placedLabels(wanted, taken, insideMap(map));
  drawLabels(
    pen,
    placed.filter(({ index }) => index >= peaks.length),
    tokens,
    `560 10.5px ${FONT}`,
  );
  drawLabels(
    pen,
    placed.filter(({ index }) => index < peaks.length),
    tokens,
    `640 13px ${FONT}`,
  );
  if (layers.rim !== null) drawRim(pen, map, layers.rim, grid.lon, theme, tokens);
  drawCursor(pen, map, layers.cursor, theme, tokens);
  drawTexts(pen, map, layers, tokens);
  if (masked) {
    pen.save();
    pen.font = `400 12px ${FONT}`;
    const text = `dotted: ${layers.maskWords}`;
    const w = pen.measureText(text).width + 14;
    const y = view.kind === "belt" ? map.box.y + map.box.height - 26 : map.cy + map.radius - 40;
    pen.beginPath();
    pen.rect(map.cx - w / 2, y, w, 20);
    pen.fillStyle = tokens.sheet;
    pen.fill();
    pen.strokeStyle = tokens.rule2;
    pen.lineWidth = 1;
    pen.stroke();
    pen.fillStyle = tokens.ink2;
    pen.textAlign = "center";
    pen.textBaseline = "middle";
    pen.fillText(text, map.cx, y + 10.5);
    pen.restore();
  }
}
