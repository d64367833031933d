import { type GeoPermissibleObjects, geoPath } from "d3-geo";
import { FONT, type Tokens } from "../theme/tokens.ts";
import { type ChartMap, RIM_LATITUDE } from "./chart-map.ts";
import { COAST, LAND } from "./coast.ts";
import type { Pen } from "./pen.ts";

export const FRAME_GAP = 7;
const FRAME_WIDTH = 5;

/** The disc or the rectangle that holds the map. */
export function outline(pen: Pen, map: ChartMap): void {
  pen.beginPath();
  if (map.view.kind === "hemisphere") pen.arc(map.cx, map.cy, map.radius, 0, 2 * Math.PI);
  else pen.rect(map.box.x, map.box.y, map.box.width, map.box.height);
}

/** Land tint, over the shading and under the lines. */
export function drawLand(pen: Pen, map: ChartMap, tokens: Tokens): void {
  const path = geoPath(map.projection, pen as never);
  pen.save();
  outline(pen, map);
  pen.clip();
  pen.beginPath();
  path(LAND.coarse as unknown as GeoPermissibleObjects);
  pen.fillStyle = tokens.land;
  pen.fill();
  pen.restore();
}

export function drawCoast(pen: Pen, map: ChartMap, tokens: Tokens): void {
  const path = geoPath(map.projection, pen as never);
  pen.save();
  outline(pen, map);
  pen.clip();
  pen.beginPath();
  path(COAST.coarse as unknown as GeoPermissibleObjects);
  pen.strokeStyle = tokens.coast;
  pen.lineWidth = 0.9;
  pen.lineJoin = "round";
  pen.stroke();
  pen.restore();
}

/** Circles and meridians. */
export function drawGraticule(pen: Pen, map: ChartMap, tokens: Tokens): void {
  const { view } = map;
  const north = view.hemisphere === "north" ? 1 : -1;
  pen.save();
  pen.strokeStyle = tokens.graticule;
  pen.lineWidth = 0.7;
  pen.beginPath();
  if (view.kind === "hemisphere") {
    for (let lat = 40; lat <= 80; lat += 20) {
      const r = Math.hypot(...minus(map.xy(0, north * lat), [map.cx, map.cy]));
      pen.moveTo(map.cx + r, map.cy);
      pen.arc(map.cx, map.cy, r, 0, 2 * Math.PI);
    }
    for (let lon = 0; lon < 360; lon += 30) {
      pen.moveTo(...map.xy(lon, north * 80));
      pen.lineTo(...map.xy(lon, north * RIM_LATITUDE));
    }
  } else {
    for (let lat = -75; lat <= 75; lat += 15) {
      const [, y] = map.xy(0, lat);
      if (y <= map.box.y || y >= map.box.y + map.box.height) continue;
      pen.moveTo(map.box.x, y);
      pen.lineTo(map.box.x + map.box.width, y);
    }
    for (let lon = 0; lon < 360; lon += 30) {
      const [x] = map.xy(lon, 0);
      pen.moveTo(x, map.box.y);
      pen.lineTo(x, map.box.y + map.box.height);
    }
  }
  pen.stroke();
  pen.restore();
}

function minus(a: readonly [number, number], b: readonly [number, number]): [number, number] {
  return [a[0] - b[0], a[1] - b[1]];
}

/** `30°W`, `0°`, `180°`. */
export function longitudeText(lon: number): string {
  const east = ((((lon + 180) % 360) + 360) % 360) - 180;
  if (east === 0) return "0°";
  return Math.abs(east) === 180 ? "180°" : `${Math.abs(east)}°${east < 0 ? "W" : "E"}`;
}

/** `60°N`. */
export function latitudeText(lat: number): string {
  return lat === 0 ? "0°" : `${Math.abs(lat)}°${lat < 0 ? "S" : "N"}`;
}

/** The alternating frame, ten degrees a piece, and the map's edge. */
export function drawFrame(pen: Pen, map: ChartMap, tokens: Tokens): void {
  pen.save();
  pen.strokeStyle = tokens.ink;
  pen.lineWidth = 1;
  outline(pen, map);
  pen.stroke();
  if (map.view.kind === "hemisphere") {
    const r = map.radius + FRAME_GAP;
    pen.beginPath();
    pen.arc(map.cx, map.cy, r + FRAME_WIDTH / 2, 0, 2 * Math.PI);
    pen.moveTo(map.cx + r - FRAME_WIDTH / 2, map.cy);
    pen.arc(map.cx, map.cy, r - FRAME_WIDTH / 2, 0, 2 * Math.PI);
    pen.stroke();
    pen.lineWidth = FRAME_WIDTH;
    for (let i = 0; i < 36; i += 2) {
      const start = Math.PI / 2 - ((10 * i - map.view.turn) * Math.PI) / 180;
      pen.beginPath();
      pen.arc(map.cx, map.cy, r, start, start + Math.PI / 18);
      pen.stroke();
    }
  } else {
    const { x, y, width, height } = map.box;
    pen.lineWidth = FRAME_WIDTH;
    for (let lon = 0; lon < 360; lon += 20) {
      const [from] = map.xy(lon, 0);
      const piece = width / 36;
      for (const at of [y - FRAME_WIDTH, y + height + FRAME_WIDTH]) {
        pen.beginPath();
        pen.moveTo(from, at);
        pen.lineTo(Math.min(from + piece, x + width), at);
        pen.stroke();
      }
    }
    pen.lineWidth = 1;
    pen.beginPath();
    pen.rect(x - FRAME_WIDTH * 1.5, y - FRAME_WIDTH * 1.5, width + FRAME_WIDTH * 3, height + FRAME_WIDTH * 3);
    pen.stroke();
  }
  pen.restore();
}

/** Names of meridians and circles. */
export function drawGraticuleNames(pen: Pen, map: ChartMap, tokens: Tokens): void {
  const { view } = map;
  const north = view.hemisphere === "north" ? 1 : -1;
  pen.save();
  pen.font = `11.5px ${FONT}`;
  pen.textAlign = "center";
  pen.textBaseline = "middle";
  const name = (text: string, x: number, y: number): void => {
    pen.strokeStyle = tokens.halo;
    pen.lineWidth = 3;
    pen.lineJoin = "round";
    pen.strokeText(text, x, y);
    pen.fillStyle = tokens.ink2;
    pen.fillText(text, x, y);
  };
  if (view.kind === "hemisphere") {
    for (let lon = -180; lon < 180; lon += 30) {
      const [x, y] = map.xy(lon, north * (RIM_LATITUDE + 3.2));
      name(longitudeText(lon), x, y);
    }
    for (const lat of [40, 60, 80]) name(latitudeText(north * lat), ...map.xy(view.turn + 172, north * lat));
  } else {
    for (let lon = -180; lon < 180; lon += 30) {
      const [x] = map.xy(lon, 0);
      if (x > map.box.x + 8 && x < map.box.x + map.box.width - 8)
        name(longitudeText(lon), x, map.box.y + map.box.height + 20);
    }
    pen.textAlign = "right";
    for (let lat = -75; lat <= 75; lat += 15) {
      const [, y] = map.xy(0, lat);
      if (y > map.box.y + 4 && y < map.box.y + map.box.height - 4) name(latitudeText(lat), map.box.x - 14, y);
    }
  }
  pen.restore();
}
