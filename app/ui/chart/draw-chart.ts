import { signedText } from "../text/number-text.ts";
import { FONT, THEMES, type ThemeName, type Tokens } from "../theme/tokens.ts";
import { type ChartLayout, chartLayout } from "./chart-layout.ts";
import type { ChartMap } from "./chart-map.ts";
import { type ChartMemory, clearCanvas } from "./chart-memory.ts";
import { type ContourLine, contourLines } from "./contour-lines.ts";
import { drawFrame, drawLand, drawNames, graticuleNames, NAME_FONT, outline } from "./draw-ground.ts";
import { drawCaptions, drawKeys } from "./draw-keys.ts";
import {
  cursorBoxes,
  drawBand,
  drawContours,
  drawCursor,
  drawLabels,
  drawPeaks,
  LINE_LABEL_FONT,
  PEAK_FONT,
} from "./draw-marks.ts";
import { drawRim } from "./draw-rim.ts";
import { drawBands, drawMask } from "./draw-shading.ts";
import { extrema } from "./extrema.ts";
import { type FineField, fineField } from "./fine-grid.ts";
import { type PlacedLabel, placedLabels, type TurnedBox, type WantedLabel } from "./labels.ts";
import { isOnMap, lineLabels } from "./line-labels.ts";
import { canvasPen, type Pen } from "./pen.ts";
import { pixelTable, shadedPixels } from "./pixel-table.ts";
import { missingPlaces, type Plane } from "./plane-rings.ts";
import type { ChartLayers, ChartView } from "./types.ts";

/** A canvas to draw on by pixels; without one the drawing is made of areas and lines alone. */
export interface Raster {
  readonly context: CanvasRenderingContext2D;
  /** Pixels of the canvas per pixel of the drawing. */
  readonly density: number;
  /** Pixels of the shading per pixel of the drawing: 2 at least for even band edges, 1 while time moves fast. */
  readonly shadingDensity: number;
  /** True while one step follows another: what is drawn is gone before it could be used again. */
  readonly isMoving: boolean;
}

/** All that the parts of a drawing have in common. */
interface Drawing {
  readonly pen: Pen;
  readonly raster: Raster | null;
  readonly layout: ChartLayout;
  readonly map: ChartMap;
  readonly layers: ChartLayers;
  readonly theme: ThemeName;
  readonly tokens: Tokens;
  readonly memory: ChartMemory;
}

/** Draw the whole chart; everything it shows is in `view` and `layers`. */
export function drawChart(
  pen: Pen,
  raster: Raster | null,
  view: ChartView,
  layers: ChartLayers,
  theme: ThemeName,
  width: number,
  height: number,
  memory: ChartMemory,
): void {
  const tokens = THEMES[theme];
  const layout = memory.kept("layout", [...Object.values(view), width, height], () => chartLayout(view, width, height));
  const { map } = layout;
  const drawing: Drawing = { pen, raster, layout, map, layers, theme, tokens, memory };
  const missing = drawGround(drawing);
  drawBand(pen, map, layers.band, tokens);
  drawFrame(pen, map, tokens);
  drawTexts(drawing, missing);
  const { rim, shading, band, grid } = layers;
  if (rim !== null)
    drawRim(pen, layout, rim, grid.lon, band, shading?.step ?? null, shading?.units ?? "", theme, tokens);
  drawCursor(pen, layout, layers.cursor, theme, tokens);
  drawCaptions(pen, layout, layers, tokens);
  drawKeys(pen, layout, layers, theme, tokens);
}

function shadingField({ layers, map, memory }: Drawing): FineField | null {
  const { grid, shading } = layers;
  if (shading === null) return null;
  return memory.kept("shading", [grid, shading.values, map.north], () => fineField(grid, shading.values, map.north));
}

function lines({ layers, map, memory }: Drawing): readonly ContourLine[] {
  const { grid, contours } = layers;
  if (contours === null) return [];
  return memory.kept("lines", [grid, contours.values, contours.interval, map.north], () =>
    contourLines(fineField(grid, contours.values, map.north), contours.interval),
  );
}

/**
 * Sheet, shading, land and contours: all that stays while the cursor moves, and so is kept as a picture.
 *
 * @returns Samples of the map if values are missing on it, else null.
 */
function drawGround(drawing: Drawing): Plane | null {
  const { pen, raster, map, layers, theme, memory } = drawing;
  const { shading, contours, grid } = layers;
  if (raster === null) return drawGroundLines(drawing, pen);
  const { context, density, shadingDensity, isMoving } = raster;
  if (isMoving) {
    pen.save();
    const missing = drawGroundLines(drawing, pen);
    pen.restore();
    return missing;
  }
  const ground = memory.kept<{ canvas: HTMLCanvasElement; missing: Plane | null }>(
    "ground",
    [
      map,
      theme,
      grid,
      shading?.values ?? null,
      shading?.step,
      contours?.values ?? null,
      contours?.interval,
      contours?.boldEach,
      density,
      shadingDensity,
    ],
    (old) => {
      const canvas = clearCanvas(old?.canvas, Math.round(map.width * density), Math.round(map.height * density));
      const own = canvas.getContext("2d") as CanvasRenderingContext2D;
      own.setTransform(density, 0, 0, density, 0, 0);
      const missing = drawGroundLines(
        { ...drawing, raster: { context: own, density, shadingDensity, isMoving } },
        canvasPen(own),
      );
      return { canvas, missing };
    },
  );
  context.drawImage(ground.canvas, 0, 0, map.width, map.height);
  return ground.missing;
}

function drawGroundLines(drawing: Drawing, pen: Pen): Plane | null {
  const { raster, map, layers, theme, tokens } = drawing;
  const { shading, contours } = layers;
  outline(pen, map);
  pen.fillStyle = tokens.sheet;
  pen.fill();
  const field = shadingField(drawing);
  let missing: Plane | null = null;
  if (field !== null && shading !== null) {
    const isMasked = raster === null ? hasMissing(field) : drawPixels(drawing, raster, field, shading.step);
    if (raster === null) drawBands(pen, map, field, shading.step, theme);
    if (isMasked) missing = drawMask(pen, map, field, tokens);
  }
  if (raster === null) drawLand(pen, map, tokens);
  else drawLandPicture(drawing, raster);
  if (contours !== null) drawContours(pen, map, lines(drawing), contours.interval, contours.boldEach, tokens);
  return missing;
}

function hasMissing(field: FineField): boolean {
  return field.values.some(Number.isNaN);
}

/** The shading pixel by pixel. @returns Whether values are missing. */
function drawPixels({ map, theme, memory }: Drawing, raster: Raster, field: FineField, step: number): boolean {
  const { context, shadingDensity: density } = raster;
  const { x, y, width, height } = map.box;
  const { nLat, nLon, lat0, dLat, dLon } = field;
  // Fast and fine shading take turns while time moves: each keeps its own.
  const table = memory.kept(
    `table ${density}`,
    [map.view.kind, map.north, x, y, width, height, nLat, nLon, lat0, dLat, dLon, density],
    () => pixelTable(map, field, density),
  );
  const scratch = memory.kept<{ canvas: HTMLCanvasElement; image: ImageData }>(`pixels ${density}`, [table], (old) => {
    const canvas = clearCanvas(old?.canvas, table.width, table.height);
    return { canvas, image: new ImageData(table.width, table.height) };
  });
  const words = new Uint32Array(scratch.image.data.buffer);
  words.fill(0);
  const isMasked = shadedPixels(table, field, map.firstLon, step, theme, words);
  (scratch.canvas.getContext("2d") as CanvasRenderingContext2D).putImageData(scratch.image, 0, 0);
  context.save();
  outline(canvasPen(context), map);
  context.clip();
  context.drawImage(
    scratch.canvas,
    table.x0 / density,
    table.y0 / density,
    table.width / density,
    table.height / density,
  );
  context.restore();
  return isMasked;
}

/** Land, graticule and coastlines from the picture of this view. */
function drawLandPicture({ map, theme, tokens, memory }: Drawing, { context, density }: Raster): void {
  const canvas = memory.kept<HTMLCanvasElement>("land", [map, theme, density], (old) => {
    const made = clearCanvas(old, Math.round(map.width * density), Math.round(map.height * density));
    const own = made.getContext("2d") as CanvasRenderingContext2D;
    own.setTransform(density, 0, 0, density, 0, 0);
    drawLand(canvasPen(own), map, tokens);
    return made;
  });
  context.drawImage(canvas, 0, 0, map.width, map.height);
}

/** Extremes shown at most; each is at least this many steps in size. */
const MOST_PEAKS = 8;
const LEAST_STEPS = 2;
const PEAK_OFFSET = 13;
/** px about a value: a contour's number close by would be read with it. */
const PEAK_GAP = 4;

interface Peak extends WantedLabel {
  readonly x: number;
  readonly y: number;
}

/** Signed values of the shading's extremes, above, below or beside their dots. */
function peaks({ map, layers, pen }: Drawing): Peak[] {
  const { shading, grid } = layers;
  if (shading === null) return [];
  pen.font = PEAK_FONT;
  return extrema(grid, shading.values, LEAST_STEPS * shading.step, map.north, MOST_PEAKS).flatMap((peak) => {
    const [x, y] = map.xy(peak.lon, peak.lat);
    if (map.lonLat(x, y) === null) return [];
    const text = signedText(peak.value, shading.step < 2 ? 1 : 0);
    const width = pen.measureText(text).width;
    const aside = width / 2 + 7;
    const places = [
      [0, -PEAK_OFFSET],
      [0, PEAK_OFFSET],
      [aside, 0],
      [-aside, 0],
      [aside, -PEAK_OFFSET * 0.8],
      [-aside, -PEAK_OFFSET * 0.8],
      [aside, PEAK_OFFSET * 0.8],
      [-aside, PEAK_OFFSET * 0.8],
      // Further out, past the cursor's ring.
      [aside + 10, 0],
      [-aside - 10, 0],
      [0, -2 * PEAK_OFFSET],
      [0, 2 * PEAK_OFFSET],
    ].map(([dx, dy]) => ({ x: x + (dx as number), y: y + (dy as number), angle: 0 }));
    return [{ text, width, height: 12, gap: PEAK_GAP, places, x, y }];
  });
}

const MASK_FONT = `400 12px ${FONT}`;

/** Names, numbers of contours and extremes, and the reason for what is missing, none on another. */
function drawTexts(drawing: Drawing, missing: Plane | null): void {
  const { pen, layout, map, layers, theme, tokens, memory } = drawing;
  const { cursor, contours, shading, grid, maskWords } = layers;
  pen.save();
  pen.font = NAME_FONT;
  const names = graticuleNames(map, cursor.lon, (text) => pen.measureText(text).width);
  const inside = names.filter(({ isOutside }) => !isOutside);
  const wanted = memory.kept(
    "wanted",
    [map, theme, grid, shading?.values ?? null, shading?.step, contours?.values ?? null, contours?.interval, maskWords],
    () => {
      const peakLabels = peaks(drawing);
      pen.font = LINE_LABEL_FONT;
      const numbers =
        contours === null
          ? []
          : lineLabels(
              map,
              lines(drawing),
              contours.interval,
              contours.boldEach,
              (text) => pen.measureText(text).width,
            );
      pen.font = MASK_FONT;
      const reason: WantedLabel[] =
        missing === null
          ? []
          : [
              {
                text: maskWords,
                width: pen.measureText(maskWords).width + 16,
                height: 18,
                places: missingPlaces(map, missing, pen.measureText(maskWords).width + 16),
              },
            ];
      return { peakLabels, reason, all: [...reason, ...peakLabels, ...numbers] };
    },
  );
  const dots = wanted.peakLabels.map(({ x, y }): TurnedBox => ({ x, y, angle: 0, width: 4, height: 4 }));
  const isInside = isOnMap(map);
  // First without the cursor, so that numbers do not wander while it is moved; then only those in its way step aside.
  const settled = memory.kept("settled", [wanted, map], () =>
    placedLabels(
      wanted.all,
      [...graticuleNames(map, Number.NaN, (text) => pen.measureText(text).width).filter((n) => !n.isOutside), ...dots],
      isInside,
    ),
  );
  const placed = placedLabels(wanted.all, [...inside, ...dots, ...cursorBoxes(layout, cursor)], isInside, settled);
  const firstPeak = wanted.reason.length;
  const firstNumber = firstPeak + wanted.peakLabels.length;
  const isPeak = ({ index }: PlacedLabel): boolean => index >= firstPeak && index < firstNumber;
  drawNames(pen, names, tokens);
  drawLabels(
    pen,
    placed.filter(({ index }) => index >= firstNumber),
    LINE_LABEL_FONT,
    tokens,
  );
  drawPeaks(
    pen,
    placed.filter(isPeak).map(({ index }) => wanted.peakLabels[index - firstPeak] as Peak),
    tokens,
  );
  drawLabels(pen, placed.filter(isPeak), PEAK_FONT, tokens);
  for (const label of placed.filter(({ index }) => index < firstPeak)) drawReason(pen, label, wanted.reason, tokens);
  pen.restore();
}

/** Why values are missing, in a frame on the spot. */
function drawReason(
  pen: Pen,
  { x, y, text, index }: PlacedLabel,
  reasons: readonly WantedLabel[],
  tokens: Tokens,
): void {
  const { width, height } = reasons[index] as WantedLabel;
  pen.save();
  pen.beginPath();
  pen.rect(Math.round(x - width / 2) + 0.5, Math.round(y - height / 2) + 0.5, Math.round(width), Math.round(height));
  pen.fillStyle = tokens.sheet;
  pen.fill();
  pen.strokeStyle = tokens.rule2;
  pen.lineWidth = 1;
  pen.stroke();
  pen.font = MASK_FONT;
  pen.fillStyle = tokens.ink2;
  pen.textAlign = "center";
  pen.textBaseline = "middle";
  pen.fillText(text, x, y + 0.5);
  pen.restore();
}
