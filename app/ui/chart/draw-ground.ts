import { type GeoPermissibleObjects, geoPath } from "d3-geo";
import { latitudeText, longitudeText } from "../text/place-text.ts";
import { FONT, type Tokens } from "../theme/tokens.ts";
import { FRAME_GAP, FRAME_WIDTH } from "./chart-layout.ts";
import { type ChartMap, RIM_LATITUDE } from "./chart-map.ts";
import { COAST, LAND } from "./coast.ts";
import type { TurnedBox } from "./labels.ts";
import type { Pen } from "./pen.ts";

/** The disc or the rectangle that holds the map. */
export function outline(pen: Pen, map: ChartMap): void {
  pen.beginPath();
  if (map.radius > 0) pen.arc(map.cx, map.cy, map.radius, 0, 2 * Math.PI);
  else pen.rect(map.box.x, map.box.y, map.box.width, map.box.height);
}

/** px of the map's width that are enough to show the finer coastline. */
const WIDE_ENOUGH = 900;

/** Land tint, circles and meridians, coastlines: all that stays while time moves. */
export function drawLand(pen: Pen, map: ChartMap, tokens: Tokens): void {
  const path = geoPath(map.projection, pen as unknown as CanvasRenderingContext2D);
  const scale = map.box.width >= WIDE_ENOUGH ? "fine" : "coarse";
  pen.save();
  outline(pen, map);
  pen.clip();
  pen.beginPath();
  path(LAND[scale] as unknown as GeoPermissibleObjects);
  pen.fillStyle = tokens.land;
  pen.fill();
  drawGraticule(pen, map, tokens);
  pen.beginPath();
  path(COAST[scale] as unknown as GeoPermissibleObjects);
  pen.strokeStyle = tokens.coast;
  pen.lineWidth = 0.9;
  pen.lineJoin = "round";
  pen.stroke();
  pen.restore();
}

const CIRCLES = [40, 60, 80] as const;
const BELT_ROWS = [15, 30, 45, 60, 75] as const;

function drawGraticule(pen: Pen, map: ChartMap, tokens: Tokens): void {
  pen.strokeStyle = tokens.graticule;
  pen.lineWidth = 0.7;
  pen.beginPath();
  if (map.radius > 0) {
    for (const lat of CIRCLES) {
      const r = Math.abs(map.xy(map.view.turn, map.north * lat)[1] - map.cy);
      pen.moveTo(map.cx + r, map.cy);
      pen.arc(map.cx, map.cy, r, 0, 2 * Math.PI);
    }
    for (let lon = 0; lon < 360; lon += 30) {
      pen.moveTo(...map.xy(lon, map.north * 80));
      pen.lineTo(...map.xy(lon, map.north * RIM_LATITUDE));
    }
  } else {
    const { x, y, width, height } = map.box;
    for (const lat of BELT_ROWS) {
      const [, v] = map.xy(map.view.cut, map.north * lat);
      pen.moveTo(x, v);
      pen.lineTo(x + width, v);
    }
    for (let lon = 0; lon < 360; lon += 30) {
      const [u] = map.xy(lon, 0);
      pen.moveTo(u, y);
      pen.lineTo(u, y + height);
    }
  }
  pen.stroke();
}

/** The alternating frame, ten degrees a piece, and the map's edge. */
export function drawFrame(pen: Pen, map: ChartMap, tokens: Tokens): void {
  pen.save();
  pen.strokeStyle = tokens.ink;
  pen.lineWidth = 1;
  outline(pen, map);
  pen.stroke();
  if (map.radius > 0) {
    const r = map.radius + FRAME_GAP;
    for (const edge of [r + FRAME_WIDTH / 2, r - FRAME_WIDTH / 2]) {
      pen.beginPath();
      pen.arc(map.cx, map.cy, edge, 0, 2 * Math.PI);
      pen.stroke();
    }
    pen.lineWidth = FRAME_WIDTH;
    for (let i = 0; i < 36; i += 2) {
      // Both hemispheres: pieces begin at whole tens of degrees; which way round they run does not show.
      const [u, v] = map.xy(10 * i, map.north * RIM_LATITUDE);
      const [u1, v1] = map.xy(10 * (i + 1), map.north * RIM_LATITUDE);
      const start = Math.atan2(v - map.cy, u - map.cx);
      const end = Math.atan2(v1 - map.cy, u1 - map.cx);
      pen.beginPath();
      pen.arc(map.cx, map.cy, r, start, end, map.north > 0);
      pen.stroke();
    }
  } else {
    const { x, y, width, height } = map.box;
    pen.lineWidth = FRAME_WIDTH;
    pen.beginPath();
    const piece = width / 36;
    for (let lon = 0; lon < 360; lon += 20) {
      const from = map.xy(lon, 0)[0];
      // The piece that the edge cuts goes on at the other side.
      for (const start of [from, from - width])
        for (const at of [y - FRAME_WIDTH, y + height + FRAME_WIDTH]) {
          if (start + piece <= x) continue;
          pen.moveTo(Math.max(x, start), at);
          pen.lineTo(Math.min(start + piece, x + width), at);
        }
    }
    pen.stroke();
    pen.lineWidth = 1;
    pen.beginPath();
    const out = FRAME_WIDTH * 1.5;
    pen.rect(x - out, y - out, width + 2 * out, height + 2 * out);
    pen.stroke();
  }
  pen.restore();
}

/** The name of a meridian or a circle, and where it stands. */
export interface GraticuleName extends TurnedBox {
  readonly text: string;
  readonly isOutside: boolean;
}

export const NAME_FONT = `400 11.5px ${FONT}`;
/** Degrees from the cursor's meridian within which a meridian's name steps aside. */
const ASIDE = 6;

/** Names of meridians and circles: inside the disc, outside the belt. */
export function graticuleNames(
  map: ChartMap,
  cursorLon: number,
  textWidth: (text: string) => number,
): readonly GraticuleName[] {
  const names: GraticuleName[] = [];
  const add = (text: string, x: number, y: number, isOutside: boolean): void => {
    names.push({ text, x, y, angle: 0, width: textWidth(text), height: 11, isOutside });
  };
  for (let lon = -180; lon < 180; lon += 30) {
    const text = longitudeText(lon);
    if (map.radius > 0) {
      const east = ((((cursorLon - lon + 180) % 360) + 360) % 360) - 180;
      const aside = Math.abs(east) < ASIDE ? (east < 0 ? 1 : -1) * (ASIDE + 0.5 - Math.abs(east)) : 0;
      const [x, y] = map.xy(lon + aside, map.north * (RIM_LATITUDE + 3.6));
      add(text, x, y, false);
    } else {
      const [x] = map.xy(lon, 0);
      const half = textWidth(text) / 2;
      const y = map.box.y + map.box.height + FRAME_WIDTH * 1.5 + 11;
      if (x > map.box.x + half - 8 && x < map.box.x + map.box.width - half + 8) add(text, x, y, true);
    }
  }
  if (map.radius > 0)
    for (const lat of CIRCLES)
      add(latitudeText(map.north * lat), ...map.xy(map.view.turn + map.north * 171, map.north * lat), false);
  else
    for (const lat of BELT_ROWS) {
      const text = latitudeText(map.north * lat);
      const [, y] = map.xy(map.view.cut, map.north * lat);
      add(text, map.box.x - FRAME_WIDTH * 1.5 - 5 - textWidth(text) / 2, y, true);
    }
  return names;
}

export function drawNames(pen: Pen, names: readonly GraticuleName[], tokens: Tokens): void {
  pen.save();
  pen.font = NAME_FONT;
  pen.textAlign = "center";
  pen.textBaseline = "middle";
  pen.lineJoin = "round";
  for (const { text, x, y, isOutside } of names) {
    if (!isOutside) {
      pen.strokeStyle = tokens.halo;
      pen.lineWidth = 3;
      pen.strokeText(text, x, y);
    }
    pen.fillStyle = tokens.ink2;
    pen.fillText(text, x, y);
  }
  pen.restore();
}
