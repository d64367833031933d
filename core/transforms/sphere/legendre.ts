/** Coefficients n = m … T of every m = 0 … T, one after the other: where (m, n) stands. */
export function place(m: number, n: number, truncation: number): number {
  return m * (truncation + 1) - (m * (m - 1)) / 2 + (n - m);
}

/** Number of (m, n) pairs with m ≥ 0. */
export function pairCount(truncation: number): number {
  return ((truncation + 1) * (truncation + 2)) / 2;
}

/** ε_mn = √((n² − m²)/(4n² − 1)). */
export function epsilon(m: number, n: number): number {
  return Math.sqrt((n * n - m * m) / (4 * n * n - 1));
}

/** Associated Legendre functions on some rows. */
export interface LegendreTable {
  /** P_mn, shape (rows, pairs of `truncation`). */
  readonly p: Float64Array;
  /** H_mn = (1 − μ²) dP_mn/dμ, same shape. */
  readonly h: Float64Array;
  readonly truncation: number;
}

/**
 * P_mn and their derivatives, normalised so that ½∫P² dμ = 1: then mean |Y|² = 1 over the sphere, ±m both counted.
 *
 * Upward recurrence in n from P_mm (Abramowitz & Stegun 1964, 8.5.3, normalised): stable for the degrees used here.
 * No Condon–Shortley sign.
 */
export function legendreTable(sines: ArrayLike<number>, truncation: number): LegendreTable {
  const T = truncation;
  const pairs = pairCount(T);
  const p = new Float64Array(sines.length * pairs);
  const h = new Float64Array(sines.length * pairs);
  const column = new Float64Array(T + 3);
  for (let j = 0; j < sines.length; j++) {
    const mu = sines[j] as number;
    const cos = Math.sqrt(Math.max(0, 1 - mu * mu));
    let top = 1;
    for (let m = 0; m <= T; m++) {
      if (m > 0) top *= cos * Math.sqrt((2 * m + 1) / (2 * m));
      column[m] = top;
      // One degree more than the truncation: the derivative needs it.
      for (let n = m + 1; n <= T + 1; n++) {
        const below = n - 2 < m ? 0 : (column[n - 2] as number) * epsilon(m, n - 1);
        column[n] = (mu * (column[n - 1] as number) - below) / epsilon(m, n);
      }
      for (let n = m; n <= T; n++) {
        const at = j * pairs + place(m, n, T);
        p[at] = column[n] as number;
        const lower = n > m ? (n + 1) * epsilon(m, n) * (column[n - 1] as number) : 0;
        h[at] = lower - n * epsilon(m, n + 1) * (column[n + 1] as number);
      }
    }
  }
  return { p, h, truncation };
}
