import { FONT, type Tokens } from "../theme/tokens.ts";
import type { ChartMap } from "./chart-map.ts";
import type { ContourLine } from "./contour-lines.ts";
import { outline } from "./draw-ground.ts";
import type { Box, LabelPlace, WantedLabel } from "./labels.ts";
import type { Pen } from "./pen.ts";

function isBold(line: ContourLine, interval: number, boldEach: number): boolean {
  return Math.round(line.level / interval) % boldEach === 0;
}

/** A line on the drawing; broken where it jumps round the belt's edge. */
function trace(pen: Pen, map: ChartMap, points: Float64Array): void {
  let before = Number.NaN;
  for (let i = 0; i < points.length; i += 2) {
    const [x, y] = map.xy(points[i] as number, points[i + 1] as number);
    const jumps = map.view.kind === "belt" && Math.abs(x - before) > map.box.width / 2;
    if (i === 0 || jumps) pen.moveTo(x, y);
    else pen.lineTo(x, y);
    before = x;
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
  for (const bold of [false, true]) {
    pen.beginPath();
    for (const line of lines) if (isBold(line, interval, boldEach) === bold) trace(pen, map, line.points);
    pen.strokeStyle = bold ? tokens.contourBold : tokens.contour;
    pen.lineWidth = bold ? 1.5 : 0.8;
    pen.stroke();
  }
  pen.restore();
}

/** Numbers wanted on the bold lines, each with places along its line where it bends least. */
export function contourLabels(
  pen: Pen,
  map: ChartMap,
  lines: readonly ContourLine[],
  interval: number,
  boldEach: number,
): WantedLabel[] {
  pen.save();
  pen.font = `560 10.5px ${FONT}`;
  const wanted: WantedLabel[] = [];
  const long = lines.filter((line) => isBold(line, interval, boldEach) && line.points.length > 60);
  for (const line of long.sort((a, b) => b.points.length - a.points.length)) {
    const n = line.points.length / 2;
    const at = (i: number) => map.xy(line.points[2 * i] as number, line.points[2 * i + 1] as number);
    const places: (LabelPlace & { bend: number })[] = [];
    for (let i = 12; i + 12 < n; i += 9) {
      const [x0, y0] = at(i - 8);
      const [x, y] = at(i);
      const [x1, y1] = at(i + 8);
      const first = Math.atan2(y - y0, x - x0);
      const second = Math.atan2(y1 - y, x1 - x);
      const bend = Math.abs(Math.atan2(Math.sin(second - first), Math.cos(second - first)));
      let angle = Math.atan2(y1 - y0, x1 - x0);
      if (angle > Math.PI / 2) angle -= Math.PI;
      if (angle < -Math.PI / 2) angle += Math.PI;
      // Steep numbers are hard to read: lying ones are liked better.
      places.push({ x, y, angle, bend: bend + 0.4 * Math.abs(angle) });
    }
    places.sort((a, b) => a.bend - b.bend);
    const text = String(line.level);
    wanted.push({ text, width: pen.measureText(text).width, height: 10, places: places.slice(0, 24) });
  }
  pen.restore();
  return wanted;
}

export function insideMap(map: ChartMap): (box: Box) => boolean {
  if (map.view.kind === "belt")
    return (box) =>
      box.x0 > map.box.x &&
      box.x1 < map.box.x + map.box.width &&
      box.y0 > map.box.y &&
      box.y1 < map.box.y + map.box.height;
  return (box) =>
    [box.x0, box.x1].every((x) => [box.y0, box.y1].every((y) => Math.hypot(x - map.cx, y - map.cy) < map.radius - 16));
}
