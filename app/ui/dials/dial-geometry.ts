import type { DialHand, DialWave } from "../chart/types.ts";
import { niceStep } from "../theme/nice-step.ts";

/** Of the ridges every 360°/k, the one nearest to a longitude. */
export function nearestRidge(ridge: number, k: number, lon: number): number {
  const cycle = 360 / k;
  return ridge + cycle * Math.round((lon - ridge) / cycle);
}

/**
 * What the four rings stand for; the last is the dial's edge and reaches the largest amplitude. On the root scale the rings
 * go as 1, 4, 9, 16 and are evenly spaced, so that small waves stay readable.
 */
export function ringValues(largest: number, isLinear: boolean): readonly number[] {
  const unit = niceStep(largest / (isLinear ? 4 : 16));
  return [1, 2, 3, 4].map((ring) => Number(((isLinear ? ring : ring ** 2) * unit).toPrecision(8)));
}

export type DialPoint = readonly [x: number, y: number];

/** Where hands end on a dial. */
export interface DialScale {
  readonly middle: number;
  readonly radius: number;
  /** Amplitude at the edge. */
  readonly most: number;
  readonly isLinear: boolean;
  /** Longitude at the foot. */
  readonly turn: number;
  /** 1: east is to the right of the foot; −1: to the left, as on the southern chart. */
  readonly east: 1 | -1;
}

/** Point at a share of the radius in a longitude's direction. */
export function dialPoint(scale: DialScale, lon: number, share: number): DialPoint {
  const angle = ((lon - scale.turn) * Math.PI) / 180;
  const r = scale.radius * share;
  return [scale.middle + scale.east * r * Math.sin(angle), scale.middle + r * Math.cos(angle)];
}

/** End of a hand that points at `lon`; longer than the dial it ends at the edge. */
export function handEnd(scale: DialScale, amplitude: number, lon: number): DialPoint {
  const share = Math.min(1, amplitude / scale.most);
  return dialPoint(scale, lon, scale.isLinear ? share : Math.sqrt(share));
}

/**
 * The trail, today's end first: back in time each ridge is the nearest to the one after it, so that the trail is one path and
 * not a leap between the wave's ridges. Days without a value are left out.
 */
export function trailPoints(scale: DialScale, wave: DialWave, cursorLon: number): DialPoint[] {
  let lon = nearestRidge(wave.ridge, wave.k, cursorLon);
  const points: DialPoint[] = [];
  for (const { amplitude, ridge } of [...wave.trail].reverse() as DialHand[]) {
    if (!Number.isFinite(amplitude) || !Number.isFinite(ridge)) continue;
    lon = nearestRidge(ridge, wave.k, lon);
    points.push(handEnd(scale, amplitude, lon));
  }
  return points;
}
