import { FONT, THEMES, type ThemeName } from "../theme/tokens.ts";
import { newCanvas } from "./Chart.tsx";
import { ChartMemory, drawChart } from "./draw-chart.ts";
import { canvasPen, type Pen, SvgPen } from "./pen.ts";
import type { ChartLayers, ChartView } from "./types.ts";

const PADDING = 18;
const LINE = 15;

/** Texts under an exported chart: what it shows, and where its numbers come from. */
export type ChartNotes = readonly string[];

function drawSheet(
  pen: Pen,
  view: ChartView,
  layers: ChartLayers,
  theme: ThemeName,
  width: number,
  height: number,
  notes: ChartNotes,
  memory: ChartMemory,
): void {
  const tokens = THEMES[theme];
  pen.fillStyle = tokens.sheet;
  pen.beginPath();
  pen.rect(0, 0, width + 2 * PADDING, sheetHeight(height, notes));
  pen.fill();
  pen.save();
  pen.translate(PADDING, PADDING);
  drawChart(pen, view, layers, theme, width, height, memory);
  pen.font = `400 12px ${FONT}`;
  pen.textAlign = "left";
  pen.textBaseline = "alphabetic";
  pen.fillStyle = tokens.ink2;
  notes.forEach((line, i) => {
    pen.fillText(line, 0, height + 22 + LINE * i);
  });
  pen.restore();
}

function sheetHeight(height: number, notes: ChartNotes): number {
  return height + 2 * PADDING + 14 + LINE * notes.length;
}

/** The chart as SVG: lines and texts as such, the shading as a picture. */
export function chartSvg(
  view: ChartView,
  layers: ChartLayers,
  theme: ThemeName,
  width: number,
  height: number,
  notes: ChartNotes,
): string {
  const context = newCanvas(1, 1).getContext("2d") as CanvasRenderingContext2D;
  const pen = new SvgPen((text, font) => {
    context.font = font;
    return context.measureText(text).width;
  });
  drawSheet(pen, view, layers, theme, width, height, notes, new ChartMemory(newCanvas, 3));
  const w = width + 2 * PADDING;
  const h = sheetHeight(height, notes);
  return `<svg xmlns="http://www.w3.org/2000/svg" width="${w}" height="${h}" viewBox="0 0 ${w} ${h}">\n${pen.content}\n</svg>\n`;
}

/** The chart as PNG, three pixels to one. */
export function chartPng(
  view: ChartView,
  layers: ChartLayers,
  theme: ThemeName,
  width: number,
  height: number,
  notes: ChartNotes,
): Promise<Blob> {
  const density = 3;
  const canvas = newCanvas((width + 2 * PADDING) * density, sheetHeight(height, notes) * density);
  const context = canvas.getContext("2d") as CanvasRenderingContext2D;
  context.scale(density, density);
  drawSheet(canvasPen(context), view, layers, theme, width, height, notes, new ChartMemory(newCanvas, density));
  return new Promise((resolve, reject) =>
    canvas.toBlob(
      (blob) => (blob === null ? reject(new Error("The picture could not be made.")) : resolve(blob)),
      "image/png",
    ),
  );
}
