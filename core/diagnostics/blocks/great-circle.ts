import { EARTH_RADIUS, RADIANS_PER_DEGREE } from "../../constants.ts";

const KM = 1e-3; // per m

/** Distance along a great circle, km; degrees in. */
export function greatCircle(lonA: number, latA: number, lonB: number, latB: number): number {
  const a = latA * RADIANS_PER_DEGREE;
  const b = latB * RADIANS_PER_DEGREE;
  const half = Math.sin((b - a) / 2) ** 2;
  const turn = Math.sin(((lonB - lonA) * RADIANS_PER_DEGREE) / 2) ** 2;
  // Haversines: exact where the points are near each other.
  return 2 * EARTH_RADIUS * KM * Math.asin(Math.sqrt(Math.min(1, half + Math.cos(a) * Math.cos(b) * turn)));
}
