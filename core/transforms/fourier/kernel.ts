/** What both kernels do; arrays are row-major, complex numbers interleaved re, im. All sums unnormalised. */
export interface FourierKernel {
  /** Σ_j x_j e^{−2πikj/n}, k = 0 … waves − 1: x (rows, n) → out (rows, waves, 2). */
  realForward(x: Float64Array, rows: number, waves: number, out: Float64Array): void;
  /** realForward of each row's departures from its first value, and each row's variance: also → variance (rows). */
  departuresForward(x: Float64Array, rows: number, waves: number, out: Float64Array, variance: Float64Array): void;
  /** Σ_k c_k e^{2πikj/n} with c_{−k} = conj c_k: c (rows, waves, 2), waves beyond are zero → out (rows, n). */
  realInverse(c: Float64Array, rows: number, waves: number, out: Float64Array): void;
  /** Σ_j z_j e^{∓2πikj/n}: z (rows, n, 2) → out (rows, n, 2). */
  complex(z: Float64Array, rows: number, inverse: boolean, out: Float64Array): void;
}
