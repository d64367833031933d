import { FONT, type ThemeName, type Tokens, waveColour } from "../theme/tokens.ts";
import { type ChartMap, RIM_LATITUDE } from "./chart-map.ts";
import { FRAME_GAP, outline } from "./draw-ground.ts";
import type { PlacedLabel } from "./labels.ts";
import type { Pen } from "./pen.ts";
import type { ChartLayers, ChartRim } from "./types.ts";

/** Text in a casing of the sheet. */
export function cased(pen: Pen, text: string, x: number, y: number, tokens: Tokens, colour: string, casing = 3): void {
  pen.lineJoin = "round";
  pen.strokeStyle = tokens.halo;
  pen.lineWidth = casing;
  pen.strokeText(text, x, y);
  pen.fillStyle = colour;
  pen.fillText(text, x, y);
}

export function drawLabels(pen: Pen, labels: readonly PlacedLabel[], tokens: Tokens, font: string): void {
  pen.save();
  pen.font = font;
  pen.textAlign = "center";
  pen.textBaseline = "middle";
  for (const label of labels) {
    pen.save();
    pen.translate(label.x, label.y);
    pen.rotate(label.angle);
    cased(pen, label.text, 0, 0, tokens, tokens.ink, 3.4);
    pen.restore();
  }
  pen.restore();
}

/** The band whose waves are shown: its edges, dotted; one line for a single row. */
export function drawBand(pen: Pen, map: ChartMap, band: readonly [number, number], tokens: Tokens): void {
  pen.save();
  outline(pen, map);
  pen.clip();
  for (const casing of [true, false]) {
    pen.beginPath();
    for (const lat of new Set(band))
      for (let lon = 0; lon <= 360; lon += 2) {
        const [x, y] =
          map.view.kind === "belt" ? [map.box.x + (lon / 360) * map.box.width, map.xy(0, lat)[1]] : map.xy(lon, lat);
        if (lon === 0) pen.moveTo(x, y);
        else pen.lineTo(x, y);
      }
    pen.setLineDash(casing ? [] : [1.6, 2.6]);
    pen.strokeStyle = casing ? tokens.halo : tokens.ink;
    pen.lineWidth = casing ? 2.6 : 1.6;
    pen.stroke();
  }
  pen.restore();
}

/** The cursor: a ring with four ticks, ink on marker, and its meridian outward to the rim. */
export function drawCursor(
  pen: Pen,
  map: ChartMap,
  cursor: { readonly lat: number; readonly lon: number },
  theme: ThemeName,
  tokens: Tokens,
): void {
  const [x, y] = map.xy(cursor.lon, cursor.lat);
  const north = map.view.hemisphere === "north" ? 1 : -1;
  if (map.lonLat(x, y) === null) return;
  const rim =
    map.view.kind === "hemisphere"
      ? map.xy(cursor.lon, north * RIM_LATITUDE)
      : ([x, map.box.y + map.box.height] as const);
  const [dx, dy] = [rim[0] - x, rim[1] - y];
  const length = Math.hypot(dx, dy) || 1;
  const start = [x + (9 * dx) / length, y + (9 * dy) / length] as const;
  pen.save();
  const [under, over] = theme === "light" ? [tokens.marker, tokens.ink] : [tokens.sheet, tokens.marker];
  const stroke = (width: number, colour: string, path: () => void): void => {
    pen.beginPath();
    path();
    pen.lineWidth = width;
    pen.strokeStyle = colour;
    pen.stroke();
  };
  const line = (): void => {
    if (length > 12) {
      pen.moveTo(...start);
      pen.lineTo(...rim);
    }
  };
  const ring = (): void => {
    pen.moveTo(x + 7, y);
    pen.arc(x, y, 7, 0, 2 * Math.PI);
    for (const [tx, ty] of [
      [1, 0],
      [-1, 0],
      [0, 1],
      [0, -1],
    ] as const) {
      pen.moveTo(x + 7 * tx, y + 7 * ty);
      pen.lineTo(x + 12 * tx, y + 12 * ty);
    }
  };
  stroke(4, under, line);
  stroke(1.3, over, line);
  stroke(5, under, ring);
  stroke(1.6, over, ring);
  pen.restore();
}

/** px of the rim's curve at `most`. */
const RIM_REACH = 15;

/** The departure along the band round the rim, filled by sign, and the leading wave with a triangle at each of its ridges. */
export function drawRim(
  pen: Pen,
  map: ChartMap,
  rim: ChartRim,
  lon: Float64Array,
  theme: ThemeName,
  tokens: Tokens,
): void {
  if (map.view.kind !== "hemisphere") return;
  const base = map.radius + FRAME_GAP + 4 + RIM_REACH;
  let most = 1e-9;
  for (const value of rim.values) if (Math.abs(value) > most) most = Math.abs(value);
  const north = map.view.hemisphere === "north" ? 1 : -1;
  const at = (degrees: number, value: number): [number, number] => {
    const angle = ((degrees - map.view.turn) * Math.PI) / 180;
    const r = base + (RIM_REACH * value) / most;
    return [map.cx + north * r * Math.sin(angle), map.cy + r * Math.cos(angle)];
  };
  const n = lon.length;
  pen.save();
  for (const sign of [1, -1]) {
    pen.beginPath();
    for (let i = 0; i <= n; i++) {
      const value = rim.values[i % n] as number;
      const place = at(
        (lon[0] as number) + (360 * i) / n,
        Number.isNaN(value) ? 0 : sign > 0 ? Math.max(0, value) : Math.min(0, value),
      );
      if (i === 0) pen.moveTo(...place);
      else pen.lineTo(...place);
    }
    for (let i = n; i >= 0; i--) pen.lineTo(...at((lon[0] as number) + (360 * i) / n, 0));
    pen.closePath();
    pen.fillStyle = sign > 0 ? (tokens.above[2] as string) : (tokens.below[2] as string);
    pen.fill();
  }
  pen.beginPath();
  pen.arc(map.cx, map.cy, base, 0, 2 * Math.PI);
  pen.strokeStyle = tokens.ink;
  pen.lineWidth = 0.8;
  pen.stroke();
  if (rim.wave !== null) {
    const { k, amplitude, ridge } = rim.wave;
    pen.beginPath();
    for (let degrees = 0; degrees <= 360; degrees += 1) {
      const place = at(degrees, Math.min(most, amplitude) * Math.cos((k * (degrees - ridge) * Math.PI) / 180));
      if (degrees === 0) pen.moveTo(...place);
      else pen.lineTo(...place);
    }
    pen.strokeStyle = waveColour(k, theme);
    pen.lineWidth = 2.2;
    pen.stroke();
    pen.fillStyle = waveColour(k, theme);
    for (let i = 0; i < k; i++) {
      const degrees = ridge + (360 * i) / k;
      const tip = at(degrees, Math.min(most, amplitude) + 0.1 * most);
      const left = at(degrees - 1.6, Math.min(most, amplitude) + 0.62 * most);
      const right = at(degrees + 1.6, Math.min(most, amplitude) + 0.62 * most);
      pen.beginPath();
      pen.moveTo(...tip);
      pen.lineTo(...left);
      pen.lineTo(...right);
      pen.closePath();
      pen.fill();
    }
  }
  pen.restore();
}

/** Caption, readout and keys round the map. */
export function drawTexts(pen: Pen, map: ChartMap, layers: ChartLayers, tokens: Tokens): void {
  pen.save();
  pen.textBaseline = "alphabetic";
  const column = (lines: readonly string[], x: number, align: CanvasTextAlign, top = 13): void => {
    pen.textAlign = align;
    lines.forEach((line, i) => {
      pen.font = i === 0 ? `620 13.5px ${FONT}` : `400 12px ${FONT}`;
      pen.fillStyle = i === 0 ? tokens.ink : tokens.ink2;
      pen.fillText(line, x, top + 15.5 * i);
    });
  };
  const belt = map.view.kind === "belt";
  column(belt ? [layers.caption.join(", ").replace(", ", ": ")] : layers.caption, 0, "left");
  column(belt ? [layers.readout.join(", ").replace(", ", ": ")] : layers.readout, map.width, "right", belt ? 28 : 13);
  const { shading, contours } = layers;
  const foot = map.height - 3;
  pen.font = `400 12px ${FONT}`;
  if (shading !== null) {
    const colours = [...tokens.below].reverse().concat(tokens.sheet, tokens.above);
    const size = 11;
    const top = foot - 27;
    colours.forEach((colour, i) => {
      pen.beginPath();
      pen.rect(i * size, top, size, 10);
      pen.fillStyle = colour;
      pen.fill();
    });
    pen.beginPath();
    pen.rect(0, top, size * 15, 10);
    pen.strokeStyle = tokens.rule2;
    pen.lineWidth = 0.6;
    pen.stroke();
    pen.fillStyle = tokens.ink2;
    pen.textAlign = "center";
    // Edges of the fourth bands, and what the middle stands for.
    const sizeText = (times: number): string => String(Number((times * shading.step).toPrecision(4)));
    pen.fillText(`−${sizeText(4)}`, 4 * size, foot);
    pen.fillText(`±${sizeText(1)}`, 7.5 * size, foot);
    pen.fillText(`+${sizeText(4)}`, 11 * size, foot);
    pen.textAlign = "left";
    pen.fillText(shading.units, 15 * size + 5, top + 9);
  }
  if (contours !== null) {
    pen.textAlign = "left";
    const rows = [
      { width: 0.8, colour: tokens.contour, text: `each ${contours.interval}` },
      { width: 1.5, colour: tokens.contourBold, text: `each ${contours.interval * contours.boldEach}` },
    ];
    const x = map.width - (belt ? 190 : 92);
    rows.forEach((row, i) => {
      const [left, y] = belt ? [x + i * 100, foot - 4] : [x, foot - 19 + 15 * i];
      pen.beginPath();
      pen.moveTo(left, y);
      pen.lineTo(left + 18, y);
      pen.strokeStyle = row.colour;
      pen.lineWidth = row.width;
      pen.stroke();
      pen.fillStyle = tokens.ink2;
      pen.fillText(row.text, left + 24, y + 4);
    });
  }
  pen.restore();
}
