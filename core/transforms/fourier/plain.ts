import type { FourierKernel } from "./kernel.ts";
import { innerLength, radices, twiddles } from "./plan.ts";

const SIN_60 = Math.sqrt(3) / 2;
const COS_72 = (Math.sqrt(5) - 1) / 4;
const COS_144 = -(Math.sqrt(5) + 1) / 4;
const SIN_72 = Math.sqrt(10 + 2 * Math.sqrt(5)) / 4;
const SIN_144 = Math.sqrt(10 - 2 * Math.sqrt(5)) / 4;

/**
 * One complex transform by self-sorting mixed-radix stages (Stockham; see Van Loan 1992, Computational Frameworks for the Fast
 * Fourier Transform, §1.7).
 *
 * With l the product of the radices done and m = n/(l r), a stage of radix r is
 * y[k + l(rj + p)] = e^{−2πi jpl/n} Σ_q x[k + l(j + mq)] e^{−2πi pq/r},  j < m, k < l, p < r.
 *
 * @returns The array of the two that holds the result.
 */
function transformed(
  n: number,
  factors: readonly number[],
  table: Float64Array,
  first: Float64Array,
  second: Float64Array,
): Float64Array {
  let x = first;
  let y = second;
  let l = 1;
  for (const r of factors) {
    const m = n / (l * r);
    const apart = 2 * l * m;
    for (let j = 0; j < m; j++) {
      for (let k = 0; k < l; k++) {
        const from = 2 * (k + l * j);
        const into = 2 * (k + l * r * j);
        butterfly(r, n, table, x, from, apart, y, into, 2 * l, j * l);
      }
    }
    [x, y] = [y, x];
    l *= r;
  }
  return x;
}

/** The r sums of one stage at one place, turned by e^{−2πi p·turn/n}. */
function butterfly(
  r: number,
  n: number,
  table: Float64Array,
  x: Float64Array,
  from: number,
  apart: number,
  y: Float64Array,
  into: number,
  step: number,
  turn: number,
): void {
  const put = (p: number, re: number, im: number): void => {
    const w = 2 * ((p * turn) % n);
    const c = table[w] as number;
    const s = table[w + 1] as number;
    const at = into + p * step;
    y[at] = re * c - im * s;
    y[at + 1] = re * s + im * c;
  };
  const re = (q: number): number => x[from + q * apart] as number;
  const im = (q: number): number => x[from + q * apart + 1] as number;
  if (r === 2) {
    put(0, re(0) + re(1), im(0) + im(1));
    put(1, re(0) - re(1), im(0) - im(1));
    return;
  }
  if (r === 3) {
    const sr = re(1) + re(2);
    const si = im(1) + im(2);
    const dr = SIN_60 * (re(1) - re(2));
    const di = SIN_60 * (im(1) - im(2));
    const mr = re(0) - 0.5 * sr;
    const mi = im(0) - 0.5 * si;
    put(0, re(0) + sr, im(0) + si);
    put(1, mr + di, mi - dr);
    put(2, mr - di, mi + dr);
    return;
  }
  if (r === 4) {
    const ar = re(0) + re(2);
    const ai = im(0) + im(2);
    const br = re(0) - re(2);
    const bi = im(0) - im(2);
    const cr = re(1) + re(3);
    const ci = im(1) + im(3);
    const dr = re(1) - re(3);
    const di = im(1) - im(3);
    put(0, ar + cr, ai + ci);
    put(1, br + di, bi - dr);
    put(2, ar - cr, ai - ci);
    put(3, br - di, bi + dr);
    return;
  }
  if (r === 5) {
    const ar = re(1) + re(4);
    const ai = im(1) + im(4);
    const br = re(2) + re(3);
    const bi = im(2) + im(3);
    const cr = re(1) - re(4);
    const ci = im(1) - im(4);
    const dr = re(2) - re(3);
    const di = im(2) - im(3);
    const er = re(0) + COS_72 * ar + COS_144 * br;
    const ei = im(0) + COS_72 * ai + COS_144 * bi;
    const fr = re(0) + COS_144 * ar + COS_72 * br;
    const fi = im(0) + COS_144 * ai + COS_72 * bi;
    const gr = SIN_72 * cr + SIN_144 * dr;
    const gi = SIN_72 * ci + SIN_144 * di;
    const hr = SIN_144 * cr - SIN_72 * dr;
    const hi = SIN_144 * ci - SIN_72 * di;
    put(0, re(0) + ar + br, im(0) + ai + bi);
    put(1, er + gi, ei - gr);
    put(2, fr + hi, fi - hr);
    put(3, fr - hi, fi + hr);
    put(4, er - gi, ei + gr);
    return;
  }
  const stride = n / r;
  for (let p = 0; p < r; p++) {
    let sr = re(0);
    let si = im(0);
    for (let q = 1; q < r; q++) {
      const w = 2 * (((p * q) % r) * stride);
      const c = table[w] as number;
      const s = table[w + 1] as number;
      sr += re(q) * c - im(q) * s;
      si += re(q) * s + im(q) * c;
    }
    put(p, sr, si);
  }
}

/** The kernel in plain TypeScript, one row at a time: the fallback where WebAssembly's SIMD is missing, and the other's oracle. */
export function plainKernel(n: number): FourierKernel {
  const even = n % 2 === 0;
  const h = innerLength(n);
  const halfTable = twiddles(h);
  const halfFactors = radices(h);
  const table = even ? twiddles(n) : halfTable;
  const factors = even ? radices(n) : halfFactors;
  const a = new Float64Array(2 * n);
  const b = new Float64Array(2 * n);

  function realForward(x: Float64Array, rows: number, waves: number, out: Float64Array): void {
    for (let row = 0; row < rows; row++) {
      const base = row * n;
      if (even) for (let j = 0; j < n; j++) a[j] = x[base + j] as number;
      else
        for (let j = 0; j < n; j++) {
          a[2 * j] = x[base + j] as number;
          a[2 * j + 1] = 0;
        }
      const z = transformed(h, halfFactors, halfTable, a, b);
      for (let k = 0; k < waves; k++) {
        const at = 2 * (row * waves + k);
        const i = 2 * (k % h);
        if (!even) {
          out[at] = z[i] as number;
          out[at + 1] = z[i + 1] as number;
          continue;
        }
        // X_k = ½(Z_k + conj Z_{h−k}) − ½ i e^{−2πik/n} (Z_k − conj Z_{h−k})
        const o = 2 * ((h - k) % h);
        const er = 0.5 * ((z[i] as number) + (z[o] as number));
        const ei = 0.5 * ((z[i + 1] as number) - (z[o + 1] as number));
        const dr = 0.5 * ((z[i] as number) - (z[o] as number));
        const di = 0.5 * ((z[i + 1] as number) + (z[o + 1] as number));
        const c = table[2 * k] as number;
        const s = table[2 * k + 1] as number;
        out[at] = er + di * c + dr * s;
        out[at + 1] = ei + di * s - dr * c;
      }
    }
  }

  function departuresForward(
    x: Float64Array,
    rows: number,
    waves: number,
    out: Float64Array,
    variance: Float64Array,
  ): void {
    const departures = new Float64Array(rows * n);
    for (let row = 0; row < rows; row++) {
      const base = row * n;
      const first = x[base] as number;
      let sum = 0;
      let squares = 0;
      for (let i = base; i < base + n; i++) {
        const d = (x[i] as number) - first;
        departures[i] = d;
        sum += d;
        squares += d * d;
      }
      // Departures from a value of the row itself: (Σd/n)² is at most n times the variance, so few digits can cancel.
      variance[row] = Math.max(0, squares / n - (sum / n) * (sum / n));
    }
    realForward(departures, rows, waves, out);
  }

  function realInverse(coefficients: Float64Array, rows: number, waves: number, out: Float64Array): void {
    for (let row = 0; row < rows; row++) {
      const base = 2 * row * waves;
      const re = (k: number): number => (k < waves ? (coefficients[base + 2 * k] as number) : 0);
      const im = (k: number): number =>
        k < waves && k > 0 && 2 * k !== n ? (coefficients[base + 2 * k + 1] as number) : 0;
      if (!even) {
        for (let k = 0; k < n; k++) {
          const folded = Math.min(k, n - k);
          // Conjugated on the way in, so that the forward stages make the inverse sum; out is real.
          a[2 * k] = re(folded);
          a[2 * k + 1] = k === folded ? -im(folded) : im(folded);
        }
        const z = transformed(n, factors, table, a, b);
        for (let j = 0; j < n; j++) out[row * n + j] = z[2 * j] as number;
        continue;
      }
      for (let k = 0; k < h; k++) {
        // Z_k = (C_k + conj C_{h−k}) + i e^{2πik/n} (C_k − conj C_{h−k}); conjugated for the forward stages
        const sr = re(k) + re(h - k);
        const si = im(k) - im(h - k);
        const dr = re(k) - re(h - k);
        const di = im(k) + im(h - k);
        const c = table[2 * k] as number;
        const s = -(table[2 * k + 1] as number);
        a[2 * k] = sr - (dr * s + di * c);
        a[2 * k + 1] = -(si + dr * c - di * s);
      }
      const z = transformed(h, halfFactors, halfTable, a, b);
      for (let j = 0; j < h; j++) {
        out[row * n + 2 * j] = z[2 * j] as number;
        out[row * n + 2 * j + 1] = -(z[2 * j + 1] as number);
      }
    }
  }

  function complex(z: Float64Array, rows: number, inverse: boolean, out: Float64Array): void {
    const sign = inverse ? -1 : 1;
    for (let row = 0; row < rows; row++) {
      const base = 2 * row * n;
      for (let j = 0; j < n; j++) {
        a[2 * j] = z[base + 2 * j] as number;
        a[2 * j + 1] = sign * (z[base + 2 * j + 1] as number);
      }
      const result = transformed(n, factors, table, a, b);
      for (let j = 0; j < n; j++) {
        out[base + 2 * j] = result[2 * j] as number;
        out[base + 2 * j + 1] = sign * (result[2 * j + 1] as number);
      }
    }
  }

  return { realForward, departuresForward, realInverse, complex };
}
