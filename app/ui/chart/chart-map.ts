import { type GeoProjection, geoAzimuthalEqualArea, geoProjection } from "d3-geo";
import type { ChartView } from "./types.ts";

/** Degrees from the pole at the hemisphere chart's rim: it reaches to 20°. */
export const RIM_LATITUDE = 20;
const HEMISPHERE_REACH = 90 - RIM_LATITUDE;
/** Latitudes of the belt chart, counted from the equator of its hemisphere. */
export const BELT_LATITUDES = [12, 84] as const;
const RADIANS = Math.PI / 180;

/** Where places lie on the drawing, and back. */
export interface ChartMap {
  readonly view: ChartView;
  readonly width: number;
  readonly height: number;
  /** Hemisphere: middle and radius of the disc. */
  readonly cx: number;
  readonly cy: number;
  readonly radius: number;
  /** Belt: its rectangle. */
  readonly box: { readonly x: number; readonly y: number; readonly width: number; readonly height: number };
  /** Place on the drawing. */
  xy(lon: number, lat: number): readonly [x: number, y: number];
  /** Longitude in [−180, 180) and latitude, or null off the chart. */
  lonLat(x: number, y: number): readonly [lon: number, lat: number] | null;
  /** For shapes that must be clipped on the sphere (coastlines). */
  readonly projection: GeoProjection;
}

/** Brought into [−180, 180). */
export function normalLongitude(lon: number): number {
  return ((((lon + 180) % 360) + 360) % 360) - 180;
}

/**
 * Hemisphere: Lambert's azimuthal equal-area projection about the pole, so that waves keep their areas. Belt: latitude and
 * longitude at right angles, each on its own scale.
 */
export function chartMap(
  view: ChartView,
  width: number,
  height: number,
  margins: { top: number; right: number; bottom: number; left: number },
): ChartMap {
  return view.kind === "hemisphere"
    ? hemisphereMap(view, width, height, margins)
    : beltMap(view, width, height, margins);
}

function hemisphereMap(
  view: ChartView,
  width: number,
  height: number,
  margins: { top: number; right: number; bottom: number; left: number },
): ChartMap {
  const radius = Math.min(width - margins.left - margins.right, height - margins.top - margins.bottom) / 2;
  const cx = margins.left + (width - margins.left - margins.right) / 2;
  const cy = margins.top + (height - margins.top - margins.bottom) / 2;
  const scale = radius / (2 * Math.sin((HEMISPHERE_REACH * RADIANS) / 2));
  const north = view.hemisphere === "north" ? 1 : -1;
  const projection = geoAzimuthalEqualArea()
    .rotate(north > 0 ? [-view.turn, -90] : [180 - view.turn, 90])
    .clipAngle(HEMISPHERE_REACH)
    .scale(scale)
    .translate([cx, cy])
    .precision(0.5);
  return {
    view,
    width,
    height,
    cx,
    cy,
    radius,
    box: { x: cx - radius, y: cy - radius, width: 2 * radius, height: 2 * radius },
    xy(lon, lat) {
      const r = 2 * scale * Math.sin(((90 - north * lat) * RADIANS) / 2);
      const angle = (lon - view.turn) * RADIANS;
      return [cx + north * r * Math.sin(angle), cy + r * Math.cos(angle)];
    },
    lonLat(x, y) {
      const dx = north * (x - cx);
      const dy = y - cy;
      const r = Math.hypot(dx, dy);
      if (r > radius) return null;
      return [
        normalLongitude(view.turn + Math.atan2(dx, dy) / RADIANS),
        north * (90 - (2 * Math.asin(r / (2 * scale))) / RADIANS),
      ];
    },
    projection,
  };
}

function beltMap(
  view: ChartView,
  width: number,
  height: number,
  margins: { top: number; right: number; bottom: number; left: number },
): ChartMap {
  const box = {
    x: margins.left,
    y: margins.top,
    width: width - margins.left - margins.right,
    height: height - margins.top - margins.bottom,
  };
  const north = view.hemisphere === "north";
  const [low, high] = BELT_LATITUDES;
  const south = north ? low : -high;
  const top = north ? high : -low;
  const perLon = box.width / 360;
  const perLat = box.height / (top - south);
  const stretch = perLat / perLon;
  const middle = (south + top) / 2;
  const projection = geoProjection((lambda, phi) => [lambda, phi * stretch])
    .rotate([-(view.cut + 180), 0])
    .scale(perLon / RADIANS)
    .translate([box.x + box.width / 2, box.y + box.height / 2 + middle * perLat])
    .clipExtent([
      [box.x, box.y],
      [box.x + box.width, box.y + box.height],
    ])
    .precision(0.5);
  return {
    view,
    width,
    height,
    cx: box.x + box.width / 2,
    cy: box.y + box.height / 2,
    radius: 0,
    box,
    xy(lon, lat) {
      const east = (((lon - view.cut) % 360) + 360) % 360;
      return [box.x + east * perLon, box.y + (top - lat) * perLat];
    },
    lonLat(x, y) {
      if (x < box.x || x > box.x + box.width || y < box.y || y > box.y + box.height) return null;
      return [normalLongitude(view.cut + (x - box.x) / perLon), top - (y - box.y) / perLat];
    },
    projection,
  };
}
