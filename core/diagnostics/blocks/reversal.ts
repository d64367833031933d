import type { BlockChoice } from "./block-choice.ts";
import type { Reversals } from "./block-rows.ts";

/** States of a cell at one step. */
export const FREE = 0;
export const BLOCKED = 1;
export const UNKNOWN = 255;

/** The cells of one hemisphere at one step. */
export interface Plane {
  /** FREE, BLOCKED or UNKNOWN, shape (rows of the lane, nLon). */
  readonly states: Uint8Array;
  /** Grid row whose height stands for a cell, same shape. */
  readonly source: Int32Array;
}

/**
 * Tibaldi & Molteni 1990 (Tellus 42A, 343): a longitude is blocked where for one offset at least
 * GHGS = (Z(φ0) − Z(φs))/(φ0 − φs) lies over, and GHGN = (Z(φn) − Z(φ0))/(φn − φ0) under its limit.
 * Unknown where no offset says blocked and one misses a height. The cell's height is the highest Z(φ0) of the offsets that
 * say blocked.
 *
 * @param z        Heights; grid row r, column i at `base + r · nLon + i`.
 */
export function oneDimensionalStates(
  z: Float64Array,
  base: number,
  nLon: number,
  found: Reversals,
  { equatorwardGradient, polewardGradient }: BlockChoice,
  { states, source }: Plane,
): void {
  states.fill(FREE);
  const { poleward, centre, equatorward, north, south } = found;
  for (let d = 0; d < centre.length; d++) {
    const n = base + poleward[d] * nLon;
    const c = base + centre[d] * nLon;
    const s = base + equatorward[d] * nLon;
    const toNorth = north[d];
    const toSouth = south[d];
    for (let i = 0; i < nLon; i++) {
      const middle = z[c + i];
      const ghgs = (middle - z[s + i]) / toSouth;
      const ghgn = (z[n + i] - middle) / toNorth;
      if (ghgs > equatorwardGradient && ghgn < polewardGradient) {
        if (states[i] !== BLOCKED || middle > z[base + source[i] * nLon + i]) source[i] = centre[d];
        states[i] = BLOCKED;
      } else if (states[i] === FREE && Number.isNaN(ghgs + ghgn)) states[i] = UNKNOWN;
    }
  }
}

/**
 * Scherrer et al. 2006 (Int. J. Climatol. 26, 233) with the subtropical condition of Davini et al. 2012 (J. Climate 25,
 * 6496): the same at every central row φ, with φ ± span, and (Z(φ − span) − Z(φ − 2 span))/span under its limit.
 * Unknown where one of the heights is missing.
 *
 * @param z As above.
 */
export function twoDimensionalStates(
  z: Float64Array,
  base: number,
  nLon: number,
  found: Reversals,
  { equatorwardGradient, polewardGradient, subtropicalGradient }: BlockChoice,
  { states }: Plane,
): void {
  const { poleward, centre, equatorward, subtropical, north, south, far } = found;
  for (let j = 0, at = 0; j < centre.length; j++) {
    const n = base + poleward[j] * nLon;
    const c = base + centre[j] * nLon;
    const s = base + equatorward[j] * nLon;
    const f = subtropical === null ? s : base + subtropical[j] * nLon;
    const toNorth = north[j];
    const toSouth = south[j];
    const toFar = far[j];
    for (let i = 0; i < nLon; i++, at++) {
      const upper = z[n + i];
      const middle = z[c + i];
      const lower = z[s + i];
      if (Number.isNaN(upper + middle + lower + z[f + i])) states[at] = UNKNOWN;
      else
        states[at] =
          (middle - lower) / toSouth > equatorwardGradient &&
          (upper - middle) / toNorth < polewardGradient &&
          (subtropical === null || (lower - z[f + i]) / toFar < subtropicalGradient)
            ? BLOCKED
            : FREE;
    }
  }
}
