import { EARTH_RADIUS, RADIANS_PER_DEGREE } from "../../constants.ts";
import { EquivalentHeights } from "./equivalent-heights.ts";
import type { HemisphereRows } from "./hemisphere-rows.ts";

/** cos φ under which a row is a pole: float32 storage moves a latitude by 4e-6°, 7e-8 rad. */
const LEAST_COSINE = 1e-6;

/** True for a row where a/cos φ has no bound. */
export function isPole(poleward: number): boolean {
  return Math.cos(poleward * RADIANS_PER_DEGREE) < LEAST_COSINE;
}

/**
 * Local wave activity of one hemisphere at one moment, Chen et al. 2015 (Geophys. Res. Lett. 42, 10952):
 *
 * A(λ, φe) = (a/cos φe) [∫_{φ>φe, ẑ>0} ẑ cos φ dφ + ∫_{φ<φe, ẑ<0} (−ẑ) cos φ dφ], ẑ = Z − Ze(φe);
 * the first part is anticyclonic (high air poleward of where it belongs), the second cyclonic. The row of φe counts half on
 * either side.
 */
export class WaveActivity {
  readonly #rows: HemisphereRows;
  readonly #nLon: number;
  readonly #equivalent: EquivalentHeights;
  readonly #heights: Float64Array;
  readonly #least: Float64Array;
  readonly #most: Float64Array;
  readonly #factors: Float64Array;

  constructor(rows: HemisphereRows, nLon: number) {
    this.#rows = rows;
    this.#nLon = nLon;
    this.#equivalent = new EquivalentHeights(rows.weights, nLon);
    this.#heights = new Float64Array(rows.weights.length);
    this.#least = new Float64Array(rows.weights.length);
    this.#most = new Float64Array(rows.weights.length);
    this.#factors = rows.poleward.map((lat) => EARTH_RADIUS / Math.cos(lat * RADIANS_PER_DEGREE));
  }

  /**
   * @param z            Heights, shape (rows, nLon), equator to pole.
   * @param anticyclonic Takes the first part on the same shape, m².
   * @param cyclonic     Takes the second.
   * @returns False where a height is missing, which leaves the hemisphere without an order; the arrays are then NaN.
   */
  write(z: Float64Array, anticyclonic: Float64Array, cyclonic: Float64Array): boolean {
    anticyclonic.fill(0);
    cyclonic.fill(0);
    if (!this.#extremes(z)) {
      anticyclonic.fill(Number.NaN);
      cyclonic.fill(Number.NaN);
      return false;
    }
    this.#equivalent.write(z, this.#heights);
    const { weights } = this.#rows;
    const nLon = this.#nLon;
    for (let e = 0; e < weights.length; e++) {
      const height = this.#heights[e];
      const into = e * nLon;
      // Rows that are nowhere over (under) Ze add nothing: most of them.
      for (let j = e; j < weights.length; j++) {
        if (this.#most[j] <= height) continue;
        const weight = (j === e ? weights[j] / 2 : weights[j]) * this.#factors[e];
        for (let i = 0, from = j * nLon; i < nLon; i++, from++) {
          const over = z[from] - height;
          if (over > 0) anticyclonic[into + i] += over * weight;
        }
      }
      for (let j = e; j >= 0; j--) {
        if (this.#least[j] >= height) continue;
        const weight = (j === e ? weights[j] / 2 : weights[j]) * this.#factors[e];
        for (let i = 0, from = j * nLon; i < nLon; i++, from++) {
          const under = height - z[from];
          if (under > 0) cyclonic[into + i] += under * weight;
        }
      }
    }
    return true;
  }

  /** Lowest and highest height of each row. @returns False where one is missing. */
  #extremes(z: Float64Array): boolean {
    const nLon = this.#nLon;
    for (let j = 0, from = 0; j < this.#least.length; j++) {
      let least = Number.POSITIVE_INFINITY;
      let most = Number.NEGATIVE_INFINITY;
      let sum = 0;
      for (let i = 0; i < nLon; i++, from++) {
        const height = z[from];
        sum += height;
        if (height < least) least = height;
        if (height > most) most = height;
      }
      if (Number.isNaN(sum)) return false;
      this.#least[j] = least;
      this.#most[j] = most;
    }
    return true;
  }
}
