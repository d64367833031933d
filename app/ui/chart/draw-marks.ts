import { FONT, type ThemeName, type Tokens } from "../theme/tokens.ts";
import { type ChartLayout, FRAME_GAP, FRAME_WIDTH } from "./chart-layout.ts";
import { type ChartMap, RIM_LATITUDE } from "./chart-map.ts";
import type { ContourLine } from "./contour-lines.ts";
import { outline } from "./draw-ground.ts";
import type { PlacedLabel, TurnedBox } from "./labels.ts";
import type { Pen } from "./pen.ts";

export const LINE_LABEL_FONT = `560 10.5px ${FONT}`;
export const PEAK_FONT = `640 13px ${FONT}`;

/** px between the points of a drawn line: a bend of 10 px radius then errs by 2²/(8 · 10) = 0.05 px. */
const POINT_SPACING = 2;

/** A line on the drawing; broken where it jumps round the belt's edge. */
function trace(pen: Pen, map: ChartMap, points: Float64Array): void {
  let drawnX = Number.NaN;
  let drawnY = Number.NaN;
  for (let i = 0; i < points.length; i += 2) {
    const [x, y] = map.xy(points[i] as number, points[i + 1] as number);
    if (i === 0 || (map.radius === 0 && Math.abs(x - drawnX) > map.box.width / 2)) pen.moveTo(x, y);
    else if (i + 2 < points.length && Math.hypot(x - drawnX, y - drawnY) < POINT_SPACING) continue;
    else pen.lineTo(x, y);
    drawnX = x;
    drawnY = y;
  }
}

export function drawContours(
  pen: Pen,
  map: ChartMap,
  lines: readonly ContourLine[],
  interval: number,
  boldEach: number,
  tokens: Tokens,
): void {
  pen.save();
  outline(pen, map);
  pen.clip();
  pen.lineJoin = "round";
  for (const isBold of [false, true]) {
    pen.beginPath();
    for (const line of lines)
      if ((Math.round(line.level / interval) % boldEach === 0) === isBold) trace(pen, map, line.points);
    pen.strokeStyle = isBold ? tokens.contourBold : tokens.contour;
    pen.lineWidth = isBold ? 1.5 : 0.8;
    pen.stroke();
  }
  pen.restore();
}

/** Texts in a casing of the sheet, turned as they were placed. */
export function drawLabels(pen: Pen, labels: readonly PlacedLabel[], font: string, tokens: Tokens): void {
  pen.save();
  pen.font = font;
  pen.textAlign = "center";
  pen.textBaseline = "middle";
  pen.lineJoin = "round";
  for (const { text, x, y, angle } of labels) {
    pen.save();
    pen.translate(x, y);
    if (angle !== 0) pen.rotate(angle);
    pen.strokeStyle = tokens.halo;
    pen.lineWidth = 3.4;
    pen.strokeText(text, 0, 0);
    pen.fillStyle = tokens.ink;
    pen.fillText(text, 0, 0);
    pen.restore();
  }
  pen.restore();
}

/** Where the extremes lie that have their numbers. */
export function drawPeaks(
  pen: Pen,
  peaks: readonly { readonly x: number; readonly y: number }[],
  tokens: Tokens,
): void {
  pen.save();
  for (const [radius, colour] of [
    [3, tokens.halo],
    [1.7, tokens.ink],
  ] as const) {
    pen.beginPath();
    for (const { x, y } of peaks) {
      pen.moveTo(x + radius, y);
      pen.arc(x, y, radius, 0, 2 * Math.PI);
    }
    pen.fillStyle = colour;
    pen.fill();
  }
  pen.restore();
}

/** The band whose waves are shown: its edges, dotted; one line for a single row. */
export function drawBand(pen: Pen, map: ChartMap, band: readonly [number, number], tokens: Tokens): void {
  pen.save();
  outline(pen, map);
  pen.clip();
  for (const isCasing of [true, false]) {
    pen.beginPath();
    for (const lat of new Set(band)) {
      const [x, y] = map.xy(map.firstLon, lat);
      if (map.radius > 0) {
        const r = Math.abs(y - map.cy);
        pen.moveTo(map.cx + r, map.cy);
        pen.arc(map.cx, map.cy, r, 0, 2 * Math.PI);
      } else {
        pen.moveTo(x, y);
        pen.lineTo(x + map.box.width, y);
      }
    }
    pen.setLineDash(isCasing ? [] : [1.6, 2.6]);
    pen.strokeStyle = isCasing ? tokens.halo : tokens.ink;
    pen.lineWidth = isCasing ? 2.8 : 1.6;
    pen.stroke();
  }
  pen.restore();
}

const RING = 7;
const TICK = 12;

/** Where the cursor's meridian ends, or null if the cursor is off the map. */
function cursorLine(
  { map }: ChartLayout,
  cursor: { readonly lat: number; readonly lon: number },
): { readonly x: number; readonly y: number; readonly endX: number; readonly endY: number } | null {
  const [x, y] = map.xy(cursor.lon, cursor.lat);
  if (map.lonLat(x, y) === null) return null;
  if (map.radius === 0) return { x, y, endX: x, endY: map.box.y + map.box.height };
  const [endX, endY] = map.xy(cursor.lon, map.north * RIM_LATITUDE);
  return { x, y, endX, endY };
}

/** What the cursor covers: no label lies there. */
export function cursorBoxes(
  layout: ChartLayout,
  cursor: { readonly lat: number; readonly lon: number },
): readonly TurnedBox[] {
  const line = cursorLine(layout, cursor);
  if (line === null) return [];
  const { x, y, endX, endY } = line;
  return [
    { x, y, angle: 0, width: 2 * TICK, height: 2 * TICK },
    {
      x: (x + endX) / 2,
      y: (y + endY) / 2,
      angle: Math.atan2(endY - y, endX - x),
      width: Math.hypot(endX - x, endY - y),
      height: 3,
    },
  ];
}

/** The cursor: a ring with four ticks, ink on marker, and its meridian outward to the rim and through the strip. */
export function drawCursor(
  pen: Pen,
  layout: ChartLayout,
  cursor: { readonly lat: number; readonly lon: number },
  theme: ThemeName,
  tokens: Tokens,
): void {
  const line = cursorLine(layout, cursor);
  const { map, strip } = layout;
  pen.save();
  const [under, over] = theme === "light" ? [tokens.marker, tokens.ink] : [tokens.sheet, tokens.marker];
  const stroke = (width: number, colour: string, path: () => void): void => {
    pen.beginPath();
    path();
    pen.lineWidth = width;
    pen.strokeStyle = colour;
    pen.stroke();
  };
  const meridian = (): void => {
    if (line !== null) {
      const { x, y, endX, endY } = line;
      const length = Math.hypot(endX - x, endY - y);
      // On through the frame, so that the longitude can be read off it.
      const on = (length + (map.radius > 0 ? FRAME_GAP + FRAME_WIDTH / 2 : FRAME_WIDTH)) / (length || 1);
      if (length > TICK) {
        pen.moveTo(x + ((RING + 2) * (endX - x)) / length, y + ((RING + 2) * (endY - y)) / length);
        pen.lineTo(x + on * (endX - x), y + on * (endY - y));
      }
    }
    if (strip !== null) {
      const [x] = map.xy(cursor.lon, cursor.lat);
      pen.moveTo(x, strip.y);
      pen.lineTo(x, strip.y + strip.height);
    }
  };
  stroke(theme === "light" ? 4 : 3.4, under, meridian);
  stroke(1.3, over, meridian);
  if (line !== null) {
    const { x, y } = line;
    const ring = (): void => {
      pen.moveTo(x + RING, y);
      pen.arc(x, y, RING, 0, 2 * Math.PI);
      for (const [tx, ty] of [
        [1, 0],
        [-1, 0],
        [0, 1],
        [0, -1],
      ] as const) {
        pen.moveTo(x + RING * tx, y + RING * ty);
        pen.lineTo(x + TICK * tx, y + TICK * ty);
      }
    };
    stroke(5, under, ring);
    stroke(1.6, over, ring);
  }
  pen.restore();
}
