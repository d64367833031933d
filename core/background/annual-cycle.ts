/** Entries of a packed symmetric matrix: the lower triangle, row by row. */
export function packedSize(m: number): number {
  return (m * (m + 1)) / 2;
}

/** 1, cos 2πp, sin 2πp, cos 4πp, … at each phase p, shape (phases, 2n + 1). */
export function harmonicBasis(phases: Float64Array, harmonics: number): Float64Array {
  const m = 2 * harmonics + 1;
  const basis = new Float64Array(phases.length * m);
  phases.forEach((phase, t) => {
    basis[t * m] = 1;
    for (let n = 1; n <= harmonics; n++) {
      const angle = 2 * Math.PI * n * phase;
      basis[t * m + 2 * n - 1] = Math.cos(angle);
      basis[t * m + 2 * n] = Math.sin(angle);
    }
  });
  return basis;
}

/** b_i b_j of step t, packed, written to `into`. */
export function stepProducts(basis: Float64Array, m: number, t: number, into: Float64Array): void {
  for (let i = 0, p = 0; i < m; i++) for (let j = 0; j <= i; j++, p++) into[p] = basis[t * m + i] * basis[t * m + j];
}

/** A pivot this small against the largest, relative, means that the steps do not tell the coefficients apart. */
const LEAST_PIVOT = 1e-10;

/**
 * Cholesky factor of a packed symmetric matrix, lower triangle; null if it is not safely positive definite.
 * Source: Golub & Van Loan, Matrix Computations, §4.2.
 */
export function choleskyFactor(packed: Float64Array, m: number): Float64Array | null {
  const factor = new Float64Array(packed);
  let largest = 0;
  for (let i = 0; i < m; i++) largest = Math.max(largest, Math.abs(packed[packedSize(i + 1) - 1] as number));
  for (let i = 0; i < m; i++) {
    const row = packedSize(i);
    for (let j = 0; j <= i; j++) {
      const other = packedSize(j);
      let sum = factor[row + j] as number;
      for (let k = 0; k < j; k++) sum -= (factor[row + k] as number) * (factor[other + k] as number);
      if (i !== j) factor[row + j] = sum / (factor[other + j] as number);
      else if (sum > LEAST_PIVOT * largest) factor[row + j] = Math.sqrt(sum);
      else return null;
    }
  }
  return factor;
}

/** Solve L Lᵀ a = b in place. */
export function solveCholesky(factor: Float64Array, b: Float64Array): void {
  const m = b.length;
  for (let i = 0; i < m; i++) {
    const row = packedSize(i);
    let sum = b[i] as number;
    for (let k = 0; k < i; k++) sum -= (factor[row + k] as number) * (b[k] as number);
    b[i] = sum / (factor[row + i] as number);
  }
  for (let i = m - 1; i >= 0; i--) {
    let sum = b[i] as number;
    for (let k = i + 1; k < m; k++) sum -= (factor[packedSize(k) + i] as number) * (b[k] as number);
    b[i] = sum / (factor[packedSize(i) + i] as number);
  }
}

/**
 * Least-squares coefficients of every cell from its normal equations.
 *
 * @param m        Number of coefficients; 1 = a plain mean.
 * @param nSteps   Steps in all.
 * @param moments  Σ b_i x, shape (m, cells).
 * @param products Σ b_i b_j over all steps, packed.
 * @param gaps     The same over the steps that a cell misses, shape (packed, cells); empty if no cell misses any.
 * @param missing  Steps that a cell misses, shape (cells).
 * @returns Shape (m, cells); NaN where the cell's steps do not suffice.
 */
export function fittedCycle(
  m: number,
  nSteps: number,
  moments: Float64Array,
  products: Float64Array,
  gaps: Float64Array,
  missing: Float64Array,
): Float64Array<ArrayBuffer> {
  const cells = missing.length;
  const pairs = packedSize(m);
  const out = new Float64Array(m * cells).fill(Number.NaN);
  const shared = choleskyFactor(products, m);
  const right = new Float64Array(m);
  const own = new Float64Array(pairs);
  for (let c = 0; c < cells; c++) {
    const lost = missing[c] as number;
    if (nSteps - lost < m) continue;
    let factor = shared;
    if (lost > 0) {
      for (let p = 0; p < pairs; p++) own[p] = (products[p] as number) - (gaps[p * cells + c] as number);
      factor = choleskyFactor(own, m);
    }
    if (factor === null) continue;
    for (let i = 0; i < m; i++) right[i] = moments[i * cells + c] as number;
    if (m === 1) out[c] = (right[0] as number) / (nSteps - lost);
    else {
      solveCholesky(factor, right);
      for (let i = 0; i < m; i++) out[i * cells + c] = right[i] as number;
    }
  }
  return out;
}
