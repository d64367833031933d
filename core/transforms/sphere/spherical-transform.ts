import { DataError } from "../../errors.ts";
import { realTransform } from "../fourier/fourier.ts";
import { gaussianRows } from "./gaussian.ts";
import { type LegendreTable, legendreTable, pairCount, place } from "./legendre.ts";

/**
 * Spherical harmonics to a triangular truncation on a Gaussian grid: f = Σ_{|m| ≤ T} Σ_n f_mn P_mn(sin φ) e^{imλ}.
 *
 * Coefficients are those of m ≥ 0, (pairs, 2) re and im, as `place` orders them; f_{−m,n} = conj f_mn.
 */
export class SphericalTransform {
  readonly truncation: number;
  readonly nLat: number;
  readonly nLon: number;
  /** sin φ, south → north. */
  readonly sines: Float64Array;
  readonly weights: Float64Array;
  readonly table: LegendreTable;
  readonly pairs: number;
  readonly #fourier: Float64Array;

  /** @throws GridError if the grid is too coarse for analysis to be exact: J ≥ T + 1 rows, N ≥ 2T + 1 columns. */
  constructor(truncation: number, nLat: number, nLon: number) {
    if (nLat < truncation + 1 || nLon < 2 * truncation + 1)
      throw new DataError(
        "GridError",
        `Truncation T${truncation} needs ${truncation + 1} Gaussian rows and ${2 * truncation + 1} columns at least; this grid has ${nLat} and ${nLon}. Truncate lower.`,
      );
    const rows = gaussianRows(nLat);
    this.truncation = truncation;
    this.nLat = nLat;
    this.nLon = nLon;
    this.sines = rows.sines;
    this.weights = rows.weights;
    this.table = legendreTable(rows.sines, truncation);
    this.pairs = pairCount(truncation);
    this.#fourier = new Float64Array(2 * nLat * (truncation + 1));
  }

  /** F_m(φ) = (1/N) Σ f e^{−imλ}, shape (rows, T + 1, 2); the first column is at 0°. */
  rows(field: Float64Array, out: Float64Array = new Float64Array(this.#fourier.length)): Float64Array {
    realTransform(this.nLon).forward(field, this.nLat, out, this.truncation + 1);
    for (let i = 0; i < out.length; i++) out[i] = (out[i] as number) / this.nLon;
    return out;
  }

  /** f_mn = ½ Σ_j w_j F_m P_mn. @param field Shape (rows, columns). @returns Shape (pairs, 2). */
  analysis(field: Float64Array): Float64Array {
    return this.projected(
      this.rows(field, this.#fourier),
      this.table.p,
      this.weights,
      new Float64Array(2 * this.pairs),
    );
  }

  /** Add ½ Σ_j weight_j F_m B_mn to `out`, B being P or H. */
  projected(fourier: Float64Array, basis: Float64Array, weights: Float64Array, out: Float64Array): Float64Array {
    const T = this.truncation;
    for (let j = 0; j < this.nLat; j++) {
      const w = (weights[j] as number) / 2;
      for (let m = 0, i = 0; m <= T; m++) {
        const re = w * (fourier[2 * (j * (T + 1) + m)] as number);
        const im = w * (fourier[2 * (j * (T + 1) + m) + 1] as number);
        for (let n = m; n <= T; n++, i++) {
          const b = basis[j * this.pairs + i] as number;
          out[2 * i] = (out[2 * i] as number) + re * b;
          out[2 * i + 1] = (out[2 * i + 1] as number) + im * b;
        }
      }
    }
    return out;
  }

  /** Values on the Gaussian grid. @param c Shape (pairs, 2). @returns Shape (rows, columns). */
  synthesis(c: Float64Array, basis: Float64Array = this.table.p): Float64Array {
    return synthesis(c, basis, this.truncation, this.nLat, this.nLon);
  }
}

/** Σ f_mn B_mn e^{imλ} on any rows, for which `basis` is tabled; columns evenly from 0°. */
export function synthesis(c: Float64Array, basis: Float64Array, T: number, nLat: number, nLon: number): Float64Array {
  const pairs = pairCount(T);
  const fourier = new Float64Array(2 * nLat * (T + 1));
  for (let j = 0; j < nLat; j++) {
    for (let m = 0; m <= T; m++) {
      let re = 0;
      let im = 0;
      for (let n = m, i = place(m, m, T); n <= T; n++, i++) {
        const b = basis[j * pairs + i] as number;
        re += (c[2 * i] as number) * b;
        im += (c[2 * i + 1] as number) * b;
      }
      fourier[2 * (j * (T + 1) + m)] = re;
      fourier[2 * (j * (T + 1) + m) + 1] = im;
    }
  }
  const out = new Float64Array(nLat * nLon);
  realTransform(nLon).inverse(fourier, nLat, out, T + 1);
  return out;
}
