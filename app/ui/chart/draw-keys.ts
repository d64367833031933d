import { bandText } from "../text/place-text.ts";
import { FONT, type ThemeName, type Tokens, waveColour } from "../theme/tokens.ts";
import { type ChartLayout, RIM_BASE, RIM_REACH } from "./chart-layout.ts";
import { levelText } from "./line-labels.ts";
import type { Pen } from "./pen.ts";
import type { ChartLayers, ChartShading } from "./types.ts";

const KEY_FONT = `400 12px ${FONT}`;
const CAP_FONT = `400 11.5px ${FONT}`;
/** px between the baselines of captions and keys. */
const LINE = 15.5;

/** Caption and readout: what is drawn, and what the cursor reads. */
export function drawCaptions(pen: Pen, layout: ChartLayout, layers: ChartLayers, tokens: Tokens): void {
  const { map, isOneLine } = layout;
  pen.save();
  pen.textBaseline = "alphabetic";
  const column = (lines: readonly string[], x: number, align: CanvasTextAlign): void => {
    pen.textAlign = align;
    lines.forEach((line, i) => {
      pen.font = i === 0 ? `620 13.5px ${FONT}` : KEY_FONT;
      pen.fillStyle = i === 0 ? tokens.ink : tokens.ink2;
      pen.fillText(line, x, 13 + LINE * i);
    });
  };
  /** The first bold, the rest after it on the same line. */
  const row = (lines: readonly string[], x: number, y: number, isRight: boolean): void => {
    const [first = "", ...others] = lines;
    const rest = others.join(", ");
    pen.font = `620 13.5px ${FONT}`;
    const firstWidth = pen.measureText(first).width + 8;
    pen.font = KEY_FONT;
    const start = isRight ? x - firstWidth - pen.measureText(rest).width : x;
    pen.textAlign = "left";
    pen.fillStyle = tokens.ink2;
    pen.fillText(rest, start + firstWidth, y);
    pen.font = `620 13.5px ${FONT}`;
    pen.fillStyle = tokens.ink;
    pen.fillText(first, start, y);
  };
  if (map.radius > 0) {
    column(layers.caption, 0, "left");
    column(layers.readout, map.width, "right");
  } else {
    row(layers.caption, 0, 13, false);
    row(layers.readout, isOneLine ? map.width : 0, isOneLine ? 13 : 13 + LINE, isOneLine);
  }
  pen.restore();
}

/** Numbers of the colour key: the edges of the last, the fourth and the first band. */
function keyNumbers({ step }: ChartShading): readonly { readonly at: number; readonly text: string }[] {
  const size = (times: number): string => levelText(times * step);
  return [
    { at: -7, text: `−${size(7)}` },
    { at: -4, text: `−${size(4)}` },
    { at: 0, text: `±${size(1)}` },
    { at: 4, text: `+${size(4)}` },
    { at: 7, text: `+${size(7)}` },
  ];
}

function rampColours(tokens: Tokens): readonly string[] {
  return [...[...tokens.below].reverse(), tokens.sheet, ...tokens.above];
}

const BENT_FROM = 30;
const BENT_TO = 66;
const BENT_WIDTH = 11;

/** The colour key, bent round the lower left of the disc. */
function drawBentKey(pen: Pen, layout: ChartLayout, shading: ChartShading, tokens: Tokens): void {
  const { map } = layout;
  const inner = map.radius + RIM_BASE + RIM_REACH + 8;
  const outer = inner + BENT_WIDTH;
  // From the upper end down: below zero first, as one reads.
  const direction = (share: number): number => ((90 + BENT_TO - (BENT_TO - BENT_FROM) * share) * Math.PI) / 180;
  const colours = rampColours(tokens);
  const wedge = (from: number, to: number): void => {
    pen.beginPath();
    pen.arc(map.cx, map.cy, inner, direction(from), direction(to), true);
    pen.arc(map.cx, map.cy, outer, direction(to), direction(from));
    pen.closePath();
  };
  colours.forEach((colour, i) => {
    wedge(i / 15, (i + 1) / 15);
    pen.fillStyle = colour;
    pen.fill();
  });
  wedge(0, 1);
  pen.strokeStyle = tokens.rule2;
  pen.lineWidth = 0.6;
  pen.stroke();
  pen.font = CAP_FONT;
  pen.fillStyle = tokens.ink2;
  pen.textAlign = "right";
  pen.textBaseline = "middle";
  for (const { at, text } of keyNumbers(shading)) {
    const angle = direction((at + 7.5) / 15);
    const [x, y] = [map.cx + (outer + 5) * Math.cos(angle), map.cy + (outer + 5) * Math.sin(angle)];
    pen.fillText(text, x, y);
    if (at === 7) {
      pen.textAlign = "left";
      pen.fillText(shading.units, x + 5, y);
      pen.textAlign = "right";
    }
  }
}

/** The colour key as a bar. */
function drawBarKey(pen: Pen, shading: ChartShading, x: number, y: number, tokens: Tokens): void {
  const size = 15;
  rampColours(tokens).forEach((colour, i) => {
    pen.beginPath();
    pen.rect(x + i * size, y, size, 9);
    pen.fillStyle = colour;
    pen.fill();
  });
  pen.beginPath();
  pen.rect(x, y, size * 15, 9);
  pen.strokeStyle = tokens.rule2;
  pen.lineWidth = 0.6;
  pen.stroke();
  pen.font = CAP_FONT;
  pen.fillStyle = tokens.ink2;
  pen.textAlign = "center";
  pen.textBaseline = "alphabetic";
  for (const { at, text } of keyNumbers(shading)) pen.fillText(text, x + (at + 7.5) * size, y + 20);
  pen.textAlign = "left";
  pen.fillText(shading.units, x + 15 * size + 6, y + 9);
}

interface KeyRow {
  readonly text: string;
  readonly width: number;
  readonly colour: string;
  readonly shape: "line" | "wave" | "dots";
}

function keyRows(layers: ChartLayers, theme: ThemeName, tokens: Tokens): readonly KeyRow[] {
  const rows: KeyRow[] = [];
  const { contours, shading, rim, band } = layers;
  if (contours !== null) {
    const units = contours.units ?? shading?.units ?? "";
    rows.push(
      {
        text: `each ${levelText(contours.interval)}${units === "" ? "" : ` ${units}`}`,
        width: 0.8,
        colour: tokens.contour,
        shape: "line",
      },
      {
        text: `each ${levelText(contours.interval * contours.boldEach)}`,
        width: 1.5,
        colour: tokens.contourBold,
        shape: "line",
      },
    );
  }
  if (rim?.wave)
    rows.push({
      text: `k ${rim.wave.k} at ${bandText(band)}`,
      width: 2.2,
      colour: waveColour(rim.wave.k, theme),
      shape: "wave",
    });
  return rows;
}

function drawKeyRow(pen: Pen, row: KeyRow, x: number, y: number, tokens: Tokens): void {
  pen.beginPath();
  if (row.shape === "wave")
    for (let i = 0; i <= 20; i++) {
      const v = y - 3.2 * Math.sin((i / 20) * 2 * Math.PI);
      if (i === 0) pen.moveTo(x, v);
      else pen.lineTo(x + i, v);
    }
  else {
    pen.moveTo(x, y);
    pen.lineTo(x + 20, y);
  }
  pen.strokeStyle = row.colour;
  pen.lineWidth = row.width;
  pen.stroke();
  pen.fillStyle = tokens.ink2;
  pen.textAlign = "left";
  pen.textBaseline = "middle";
  pen.font = KEY_FONT;
  pen.fillText(row.text, x + 26, y + 0.5);
}

/** What the colours and the lines stand for. */
export function drawKeys(pen: Pen, layout: ChartLayout, layers: ChartLayers, theme: ThemeName, tokens: Tokens): void {
  const { map } = layout;
  const rows = keyRows(layers, theme, tokens);
  pen.save();
  pen.font = KEY_FONT;
  if (map.radius > 0) {
    if (layers.shading !== null) drawBentKey(pen, layout, layers.shading, tokens);
    pen.font = KEY_FONT;
    const wide = Math.max(0, ...rows.map(({ text }) => pen.measureText(text).width)) + 26;
    rows.forEach((row, i) => {
      drawKeyRow(pen, row, map.width - wide, map.height - 8 - LINE * (rows.length - 1 - i), tokens);
    });
  } else {
    // Two lines where one is too short for both keys.
    const [y, rowY] = layout.isOneLine ? [layout.foot - 24, layout.foot - 19] : [layout.foot - 44, layout.foot - 8];
    if (layers.shading !== null) drawBarKey(pen, layers.shading, map.box.x, y, tokens);
    const widths = rows.map(({ text }) => pen.measureText(text).width + 26 + 16);
    let x = layout.isOneLine ? map.box.x + map.box.width + 16 - widths.reduce((sum, wide) => sum + wide, 0) : map.box.x;
    rows.forEach((row, i) => {
      drawKeyRow(pen, row, x, rowY, tokens);
      x += widths[i] as number;
    });
  }
  pen.restore();
}
