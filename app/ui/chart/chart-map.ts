import { type GeoProjection, geoAzimuthalEqualArea, geoProjection } from "d3-geo";
import type { ChartView } from "./types.ts";

/** Latitude at the hemisphere chart's rim. */
export const RIM_LATITUDE = 20;
const HEMISPHERE_REACH = 90 - RIM_LATITUDE;
/** Latitudes of the belt chart, counted from the equator of its hemisphere. */
export const BELT_LATITUDES = [12, 84] as const;
/** A degree of latitude is at most this many degrees of longitude tall: more would make every wave a spike. */
export const MOST_STRETCH = 2.9;
const RADIANS = Math.PI / 180;

export interface Rectangle {
  readonly x: number;
  readonly y: number;
  readonly width: number;
  readonly height: number;
}

/** Where places lie on the drawing, and back. */
export interface ChartMap {
  readonly view: ChartView;
  /** 1 for the northern hemisphere, −1 for the southern. */
  readonly north: 1 | -1;
  /** Size of the whole drawing. */
  readonly width: number;
  readonly height: number;
  /** Middle of the map; for the hemisphere, of its disc. */
  readonly cx: number;
  readonly cy: number;
  /** Radius of the disc; 0 for the belt. */
  readonly radius: number;
  /** The rectangle that holds the map. */
  readonly box: Rectangle;
  /** Longitude where the map begins: at the foot of the disc or at the belt's left edge. */
  readonly firstLon: number;
  /** Place on the drawing. */
  xy(lon: number, lat: number): readonly [x: number, y: number];
  /** Degrees east of `firstLon`, in [0, 360), and latitude, on and beyond the map. */
  beyond(x: number, y: number): readonly [east: number, lat: number];
  /** Longitude in [−180, 180) and latitude, or null off the map. */
  lonLat(x: number, y: number): readonly [lon: number, lat: number] | null;
  /** The same map for shapes that must be clipped on the sphere (coastlines). */
  readonly projection: GeoProjection;
}

/** Brought into [−180, 180). */
export function normalLongitude(lon: number): number {
  return ((((lon + 180) % 360) + 360) % 360) - 180;
}

/** Brought into [0, 360). */
function turnedEast(lon: number): number {
  const east = lon % 360;
  return east < 0 ? (east + 360) % 360 : east;
}

/** The map without its shapes' projection: where the disc or the belt lies within the drawing. */
export interface Placing {
  readonly width: number;
  readonly height: number;
  readonly box: Rectangle;
}

/**
 * Lambert's azimuthal equal-area projection about the pole, so that waves keep their areas: r = 2 s · sin(c/2), c the degrees
 * from the pole (Snyder 1987, USGS Professional Paper 1395, eq. 24-13). The placing's box is a square.
 */
export function hemisphereMap(view: ChartView, { width, height, box }: Placing): ChartMap {
  const radius = box.width / 2;
  const cx = box.x + radius;
  const cy = box.y + radius;
  const scale = radius / (2 * Math.sin((HEMISPHERE_REACH * RADIANS) / 2));
  const north = view.hemisphere === "north" ? 1 : -1;
  const beyond = (x: number, y: number): readonly [number, number] => {
    const dx = north * (x - cx);
    const dy = y - cy;
    const away = 2 * Math.asin(Math.min(1, Math.hypot(dx, dy) / (2 * scale)));
    return [turnedEast(Math.atan2(dx, dy) / RADIANS), north * (90 - away / RADIANS)];
  };
  return {
    view,
    north,
    width,
    height,
    cx,
    cy,
    radius,
    box,
    firstLon: view.turn,
    xy(lon, lat) {
      const r = 2 * scale * Math.sin(((90 - north * lat) * RADIANS) / 2);
      const angle = (lon - view.turn) * RADIANS;
      return [cx + north * r * Math.sin(angle), cy + r * Math.cos(angle)];
    },
    beyond,
    lonLat(x, y) {
      if (Math.hypot(x - cx, y - cy) > radius) return null;
      const [east, lat] = beyond(x, y);
      return [normalLongitude(view.turn + east), lat];
    },
    projection: geoAzimuthalEqualArea()
      .rotate(north > 0 ? [-view.turn, -90] : [180 - view.turn, 90])
      .clipAngle(HEMISPHERE_REACH)
      .scale(scale)
      .translate([cx, cy])
      .precision(0.5),
  };
}

/** Latitude and longitude at right angles, each on its own scale. */
export function beltMap(view: ChartView, { width, height, box }: Placing): ChartMap {
  const north = view.hemisphere === "north" ? 1 : -1;
  const [low, high] = BELT_LATITUDES;
  const top = north > 0 ? high : -low;
  const perLon = box.width / 360;
  const perLat = box.height / (high - low);
  const middle = (north * (low + high)) / 2;
  const beyond = (x: number, y: number): readonly [number, number] => [
    turnedEast((x - box.x) / perLon),
    Math.max(-90, Math.min(90, top - (y - box.y) / perLat)),
  ];
  return {
    view,
    north,
    width,
    height,
    cx: box.x + box.width / 2,
    cy: box.y + box.height / 2,
    radius: 0,
    box,
    firstLon: view.cut,
    xy(lon, lat) {
      return [box.x + turnedEast(lon - view.cut) * perLon, box.y + (top - lat) * perLat];
    },
    beyond,
    lonLat(x, y) {
      if (x < box.x || x > box.x + box.width || y < box.y || y > box.y + box.height) return null;
      const [, lat] = beyond(x, y);
      return [normalLongitude(view.cut + (x - box.x) / perLon), lat];
    },
    projection: geoProjection((lambda, phi) => [lambda, (phi * perLat) / perLon])
      .rotate([-(view.cut + 180), 0])
      .scale(perLon / RADIANS)
      .translate([box.x + box.width / 2, box.y + box.height / 2 + middle * perLat])
      .clipExtent([
        [box.x, box.y],
        [box.x + box.width, box.y + box.height],
      ])
      .precision(0.5),
  };
}
