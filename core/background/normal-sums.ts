import { packedSize, stepProducts } from "./annual-cycle.ts";

/** Sums over some steps from which a background is fitted, in buffers of their own. */
export type NormalSums = {
  /** Σ b_i x, shape (coefficients, cells). */
  readonly moments: Float64Array<ArrayBuffer>;
  /** Σ b_i b_j over all steps, packed. */
  readonly products: Float64Array<ArrayBuffer>;
  /** The same over the steps that a cell misses, shape (packed, cells); empty if none misses any. */
  readonly gaps: Float64Array<ArrayBuffer>;
  /** Steps that each cell misses. */
  readonly missing: Float64Array<ArrayBuffer>;
};

/**
 * Σ b_i x of each cell, step after step in the order of time.
 *
 * Four steps are added per pass over the sums: the same additions in the same order, with a quarter of the traffic.
 */
function moments(x: Float64Array, basis: Float64Array, m: number, cells: number): Float64Array<ArrayBuffer> {
  const out = new Float64Array(m * cells);
  const steps = basis.length / m;
  let t = 0;
  for (; t + 3 < steps; t += 4) {
    const x0 = t * cells;
    const [x1, x2, x3] = [x0 + cells, x0 + 2 * cells, x0 + 3 * cells];
    for (let i = 0; i < m; i++) {
      const b0 = basis[t * m + i];
      const b1 = basis[(t + 1) * m + i];
      const b2 = basis[(t + 2) * m + i];
      const b3 = basis[(t + 3) * m + i];
      for (let c = 0, into = i * cells; c < cells; c++, into++)
        out[into] = out[into] + b0 * x[x0 + c] + b1 * x[x1 + c] + b2 * x[x2 + c] + b3 * x[x3 + c];
    }
  }
  for (; t < steps; t++)
    for (let i = 0; i < m; i++) {
      const b = basis[t * m + i];
      for (let c = 0; c < cells; c++) out[i * cells + c] += b * x[t * cells + c];
    }
  return out;
}

/**
 * Sums of the normal equations over some steps.
 *
 * @param x     Shape (steps, cells); NaN is missing. Not modified.
 * @param basis Basis functions at the steps, shape (steps, m).
 */
export function normalSums(x: Float64Array, basis: Float64Array, m: number, cells: number): NormalSums {
  const steps = basis.length / m;
  const pairs = packedSize(m);
  const products = new Float64Array(pairs);
  const own = new Float64Array(pairs);
  const missing = new Float64Array(cells);
  let gaps = new Float64Array(0);
  // A missing value adds nothing: it becomes 0, in a copy that is made only if there is one.
  let present = x;
  for (let t = 0; t < steps; t++) {
    stepProducts(basis, m, t, own);
    for (let p = 0; p < pairs; p++) products[p] += own[p];
    for (let c = 0; c < cells; c++) {
      if (!Number.isNaN(x[t * cells + c])) continue;
      if (present === x) {
        present = x.slice();
        gaps = new Float64Array(pairs * cells);
      }
      present[t * cells + c] = 0;
      missing[c] += 1;
      for (let p = 0; p < pairs; p++) gaps[p * cells + c] += own[p];
    }
  }
  return { moments: moments(present, basis, m, cells), products, gaps, missing };
}
