import { FONT, THEMES, type ThemeName } from "../theme/tokens.ts";
import { ChartMemory } from "./chart-memory.ts";
import { drawChart, type Raster } from "./draw-chart.ts";
import { canvasPen, type Pen } from "./pen.ts";
import { escaped, SvgPen } from "./svg-pen.ts";
import type { ChartLayers, ChartView } from "./types.ts";

const PADDING = 18;
const LINE = 15;
const NOTE_FONT = `400 12px ${FONT}`;

/** Texts under an exported chart: what it shows, and where its numbers come from. */
export type ChartNotes = readonly string[];

/** Width of a text in a font, px. */
export type TextMeasure = (text: string, font: string) => number;

function canvasMeasure(): TextMeasure {
  const context = document.createElement("canvas").getContext("2d") as CanvasRenderingContext2D;
  return (text, font) => {
    context.font = font;
    return context.measureText(text).width;
  };
}

/** The notes broken into lines that fit the sheet. */
export function noteLines(notes: ChartNotes, width: number, measure: TextMeasure): string[] {
  return notes
    .filter((note) => note !== "")
    .flatMap((note) => {
      const lines: string[] = [];
      let line = "";
      for (const word of note.split(" ")) {
        const longer = line === "" ? word : `${line} ${word}`;
        if (line !== "" && measure(longer, NOTE_FONT) > width) {
          lines.push(line);
          line = word;
        } else line = longer;
      }
      return [...lines, line];
    });
}

interface Sheet {
  readonly width: number;
  readonly height: number;
  readonly lines: readonly string[];
}

function sheetFor(width: number, height: number, notes: ChartNotes, measure: TextMeasure): Sheet {
  const lines = noteLines(notes, width, measure);
  return { width: width + 2 * PADDING, height: height + 2 * PADDING + 14 + LINE * lines.length, lines };
}

function drawNotes(pen: Pen, lines: readonly string[], height: number, theme: ThemeName): void {
  pen.font = NOTE_FONT;
  pen.textAlign = "left";
  pen.textBaseline = "alphabetic";
  pen.fillStyle = THEMES[theme].ink2;
  lines.forEach((line, i) => {
    pen.fillText(line, 0, height + 22 + LINE * i);
  });
}

/**
 * The chart as SVG: areas, lines and texts, nothing by the pixel.
 *
 * @param measure Width of a text; the browser's own unless it is given.
 */
export function chartSvg(
  view: ChartView,
  layers: ChartLayers,
  theme: ThemeName,
  width: number,
  height: number,
  notes: ChartNotes,
  measure: TextMeasure = canvasMeasure(),
): string {
  const sheet = sheetFor(width, height, notes, measure);
  const pen = new SvgPen(measure);
  pen.fillStyle = THEMES[theme].sheet;
  pen.beginPath();
  pen.rect(0, 0, sheet.width, sheet.height);
  pen.fill();
  pen.save();
  pen.translate(PADDING, PADDING);
  drawChart(pen, null, view, layers, theme, width, height, new ChartMemory());
  drawNotes(pen, sheet.lines, height, theme);
  pen.restore();
  const { width: w, height: h } = sheet;
  return [
    `<svg xmlns="http://www.w3.org/2000/svg" width="${w}" height="${h}" viewBox="0 0 ${w} ${h}" role="img">`,
    `<title>${escaped(layers.caption.join(", "))}</title>`,
    `<desc>${escaped([layers.readout.join(", "), ...notes].join(" | "))}</desc>`,
    pen.content,
    "</svg>\n",
  ].join("\n");
}

/**
 * The chart as PNG, three pixels to one.
 *
 * @throws Error if the browser cannot make the picture.
 */
export function chartPng(
  view: ChartView,
  layers: ChartLayers,
  theme: ThemeName,
  width: number,
  height: number,
  notes: ChartNotes,
): Promise<Blob> {
  const density = 3;
  const sheet = sheetFor(width, height, notes, canvasMeasure());
  const canvas = document.createElement("canvas");
  canvas.width = sheet.width * density;
  canvas.height = sheet.height * density;
  const context = canvas.getContext("2d") as CanvasRenderingContext2D;
  context.scale(density, density);
  context.fillStyle = THEMES[theme].sheet;
  context.fillRect(0, 0, sheet.width, sheet.height);
  context.translate(PADDING, PADDING);
  const raster: Raster = { context, density, shadingDensity: density, isMoving: false };
  drawChart(canvasPen(context), raster, view, layers, theme, width, height, new ChartMemory());
  drawNotes(canvasPen(context), sheet.lines, height, theme);
  return new Promise((resolve, reject) =>
    canvas.toBlob(
      (blob) => (blob === null ? reject(new Error("The picture could not be made.")) : resolve(blob)),
      "image/png",
    ),
  );
}
