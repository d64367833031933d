// Fourier transforms of two rows at a time: each v128 holds the same number of both rows. AssemblyScript.
// The same stages as ../../plain.ts, its oracle in the tests. Memory is laid out by ../../wasm.ts; nothing is allocated here.
// A complex number is two v128 (re, im), 32 bytes; tables hold plain f64 pairs (cos, sin), 16 bytes.

@inline function re(base: usize, i: usize): v128 { return v128.load(base + (i << 5)); }
@inline function im(base: usize, i: usize): v128 { return v128.load(base + (i << 5), 16); }
@inline function keep(base: usize, i: usize, r: v128, s: v128): void {
  v128.store(base + (i << 5), r);
  v128.store(base + (i << 5), s, 16);
}
@inline function add(a: v128, b: v128): v128 { return f64x2.add(a, b); }
@inline function sub(a: v128, b: v128): v128 { return f64x2.sub(a, b); }
@inline function mul(a: v128, b: v128): v128 { return f64x2.mul(a, b); }
@inline function splat(x: f64): v128 { return f64x2.splat(x); }
@inline function pair(a: usize, b: usize): v128 { return f64x2.replace_lane(v128.load64_splat(a), 1, load<f64>(b)); }

/** Store (r, s) · e^{−2πi·index/n}. */
@inline function turned(base: usize, i: usize, r: v128, s: v128, table: usize, index: u32): void {
  const c = v128.load64_splat(table + ((<usize>index) << 4));
  const w = v128.load64_splat(table + ((<usize>index) << 4), 8);
  keep(base, i, sub(mul(r, c), mul(s, w)), add(mul(r, w), mul(s, c)));
}

const SIN_60: f64 = 0.8660254037844386;
const COS_72: f64 = 0.30901699437494745;
const COS_144: f64 = -0.8090169943749475;
const SIN_72: f64 = 0.9510565162951535;
const SIN_144: f64 = 0.5877852522924731;

/** @returns 1 if the result lies in `second`, 0 if in `first`. */
function transform(n: u32, factors: usize, count: u32, table: usize, first: usize, second: usize): u32 {
  let x = first, y = second;
  let l: u32 = 1;
  for (let f: u32 = 0; f < count; f++) {
    const r = load<u32>(factors + (f << 2));
    const m = n / (l * r);
    const apart: usize = l * m;
    for (let j: u32 = 0; j < m; j++) {
      const turn = j * l;
      for (let k: u32 = 0; k < l; k++) {
        const from: usize = k + l * j;
        const into: usize = k + l * r * j;
        const L: usize = l;
        if (r == 4) {
          const ar = add(re(x, from), re(x, from + 2 * apart)), ai = add(im(x, from), im(x, from + 2 * apart));
          const br = sub(re(x, from), re(x, from + 2 * apart)), bi = sub(im(x, from), im(x, from + 2 * apart));
          const cr = add(re(x, from + apart), re(x, from + 3 * apart)), ci = add(im(x, from + apart), im(x, from + 3 * apart));
          const dr = sub(re(x, from + apart), re(x, from + 3 * apart)), di = sub(im(x, from + apart), im(x, from + 3 * apart));
          keep(y, into, add(ar, cr), add(ai, ci));
          turned(y, into + L, add(br, di), sub(bi, dr), table, turn);
          turned(y, into + 2 * L, sub(ar, cr), sub(ai, ci), table, 2 * turn);
          turned(y, into + 3 * L, sub(br, di), add(bi, dr), table, 3 * turn);
        } else if (r == 3) {
          const r0 = re(x, from), i0 = im(x, from);
          const sr = add(re(x, from + apart), re(x, from + 2 * apart)), si = add(im(x, from + apart), im(x, from + 2 * apart));
          const dr = mul(splat(SIN_60), sub(re(x, from + apart), re(x, from + 2 * apart)));
          const di = mul(splat(SIN_60), sub(im(x, from + apart), im(x, from + 2 * apart)));
          const mr = sub(r0, mul(splat(0.5), sr)), mi = sub(i0, mul(splat(0.5), si));
          keep(y, into, add(r0, sr), add(i0, si));
          turned(y, into + L, add(mr, di), sub(mi, dr), table, turn);
          turned(y, into + 2 * L, sub(mr, di), add(mi, dr), table, 2 * turn);
        } else if (r == 2) {
          const r0 = re(x, from), i0 = im(x, from), r1 = re(x, from + apart), i1 = im(x, from + apart);
          keep(y, into, add(r0, r1), add(i0, i1));
          turned(y, into + L, sub(r0, r1), sub(i0, i1), table, turn);
        } else if (r == 5) {
          const r0 = re(x, from), i0 = im(x, from);
          const ar = add(re(x, from + apart), re(x, from + 4 * apart)), ai = add(im(x, from + apart), im(x, from + 4 * apart));
          const br = add(re(x, from + 2 * apart), re(x, from + 3 * apart)), bi = add(im(x, from + 2 * apart), im(x, from + 3 * apart));
          const cr = sub(re(x, from + apart), re(x, from + 4 * apart)), ci = sub(im(x, from + apart), im(x, from + 4 * apart));
          const dr = sub(re(x, from + 2 * apart), re(x, from + 3 * apart)), di = sub(im(x, from + 2 * apart), im(x, from + 3 * apart));
          const er = add(add(r0, mul(splat(COS_72), ar)), mul(splat(COS_144), br));
          const ei = add(add(i0, mul(splat(COS_72), ai)), mul(splat(COS_144), bi));
          const fr = add(add(r0, mul(splat(COS_144), ar)), mul(splat(COS_72), br));
          const fi = add(add(i0, mul(splat(COS_144), ai)), mul(splat(COS_72), bi));
          const gr = add(mul(splat(SIN_72), cr), mul(splat(SIN_144), dr)), gi = add(mul(splat(SIN_72), ci), mul(splat(SIN_144), di));
          const hr = sub(mul(splat(SIN_144), cr), mul(splat(SIN_72), dr)), hi = sub(mul(splat(SIN_144), ci), mul(splat(SIN_72), di));
          keep(y, into, add(add(r0, ar), br), add(add(i0, ai), bi));
          turned(y, into + L, add(er, gi), sub(ei, gr), table, turn);
          turned(y, into + 2 * L, add(fr, hi), sub(fi, hr), table, 2 * turn);
          turned(y, into + 3 * L, sub(fr, hi), add(fi, hr), table, 3 * turn);
          turned(y, into + 4 * L, sub(er, gi), add(ei, gr), table, 4 * turn);
        } else {
          const stride = n / r;
          for (let p: u32 = 0; p < r; p++) {
            let sr = re(x, from), si = im(x, from);
            for (let q: u32 = 1; q < r; q++) {
              const w = table + ((<usize>(((p * q) % r) * stride)) << 4);
              const c = v128.load64_splat(w), s = v128.load64_splat(w, 8);
              const xr = re(x, from + q * apart), xi = im(x, from + q * apart);
              sr = add(sr, sub(mul(xr, c), mul(xi, s)));
              si = add(si, add(mul(xr, s), mul(xi, c)));
            }
            turned(y, into + p * L, sr, si, table, (p * turn) % n);
          }
        }
      }
    }
    const held = x; x = y; y = held;
    l *= r;
  }
  return x == first ? 0 : 1;
}

@inline function split(at0: usize, at1: usize, r: v128, s: v128): void {
  store<f64>(at0, f64x2.extract_lane(r, 0)); store<f64>(at0, f64x2.extract_lane(s, 0), 8);
  store<f64>(at1, f64x2.extract_lane(r, 1)); store<f64>(at1, f64x2.extract_lane(s, 1), 8);
}

/** x (rows, n) → out (rows, waves, 2), an even number of rows. `h` is n/2 for even n (factors and halfTable are its), else n. */
export function realForward(
  n: u32, h: u32, rows: u32, waves: u32, factors: usize, count: u32, halfTable: usize, table: usize, x: usize, out: usize, first: usize, second: usize,
): void {
  const even = h != n;
  for (let row: u32 = 0; row < rows; row += 2) {
    const x0 = x + (<usize>(row * n) << 3), x1 = x0 + (<usize>n << 3);
    if (even) {
      for (let j: u32 = 0; j < h; j++) {
        const o = <usize>j << 4;
        keep(first, j, pair(x0 + o, x1 + o), pair(x0 + o + 8, x1 + o + 8));
      }
    } else {
      for (let j: u32 = 0; j < n; j++) {
        const o = <usize>j << 3;
        keep(first, j, pair(x0 + o, x1 + o), splat(0));
      }
    }
    const z = transform(h, factors, count, halfTable, first, second) ? second : first;
    const out0 = out + (<usize>(row * waves) << 4), out1 = out0 + (<usize>waves << 4);
    for (let k: u32 = 0; k < waves; k++) {
      const at = <usize>k << 4;
      const i: usize = k % h;
      if (!even) {
        split(out0 + at, out1 + at, re(z, i), im(z, i));
        continue;
      }
      const o: usize = (h - k) % h;
      const half = splat(0.5);
      const er = mul(half, add(re(z, i), re(z, o))), ei = mul(half, sub(im(z, i), im(z, o)));
      const dr = mul(half, sub(re(z, i), re(z, o))), di = mul(half, add(im(z, i), im(z, o)));
      const c = v128.load64_splat(table + at), s = v128.load64_splat(table + at, 8);
      split(out0 + at, out1 + at, add(add(er, mul(di, c)), mul(dr, s)), sub(add(ei, mul(di, s)), mul(dr, c)));
    }
  }
}

@inline function coefficient(c0: usize, c1: usize, k: u32, waves: u32, part: usize): v128 {
  if (k >= waves) return splat(0);
  const at = (<usize>k << 4) + part;
  return pair(c0 + at, c1 + at);
}
/** Imaginary part; the mean and the Nyquist wave have none. */
@inline function imaginary(c0: usize, c1: usize, k: u32, waves: u32, n: u32): v128 {
  return k == 0 || 2 * k == n ? splat(0) : coefficient(c0, c1, k, waves, 8);
}

/** c (rows, waves, 2) → out (rows, n), an even number of rows. */
export function realInverse(
  n: u32, h: u32, rows: u32, waves: u32, factors: usize, count: u32, halfTable: usize, table: usize, c: usize, out: usize, first: usize, second: usize,
): void {
  const even = h != n;
  for (let row: u32 = 0; row < rows; row += 2) {
    const c0 = c + (<usize>(row * waves) << 4), c1 = c0 + (<usize>waves << 4);
    if (even) {
      for (let k: u32 = 0; k < h; k++) {
        const ar = coefficient(c0, c1, k, waves, 0), ai = imaginary(c0, c1, k, waves, n);
        const br = coefficient(c0, c1, h - k, waves, 0), bi = imaginary(c0, c1, h - k, waves, n);
        const sr = add(ar, br), si = sub(ai, bi), dr = sub(ar, br), di = add(ai, bi);
        const cos = v128.load64_splat(table + (<usize>k << 4)), sin = f64x2.neg(v128.load64_splat(table + (<usize>k << 4), 8));
        keep(first, k, sub(sr, add(mul(dr, sin), mul(di, cos))), f64x2.neg(sub(add(si, mul(dr, cos)), mul(di, sin))));
      }
    } else {
      for (let k: u32 = 0; k < n; k++) {
        const folded = k <= n - k ? k : n - k;
        const i = imaginary(c0, c1, folded, waves, n);
        keep(first, k, coefficient(c0, c1, folded, waves, 0), k == folded ? f64x2.neg(i) : i);
      }
    }
    const z = transform(h, factors, count, halfTable, first, second) ? second : first;
    const out0 = out + (<usize>(row * n) << 3), out1 = out0 + (<usize>n << 3);
    if (even) {
      for (let j: u32 = 0; j < h; j++) split(out0 + (<usize>j << 4), out1 + (<usize>j << 4), re(z, j), f64x2.neg(im(z, j)));
    } else {
      for (let j: u32 = 0; j < n; j++) {
        store<f64>(out0 + (<usize>j << 3), f64x2.extract_lane(re(z, j), 0));
        store<f64>(out1 + (<usize>j << 3), f64x2.extract_lane(re(z, j), 1));
      }
    }
  }
}

/** z (rows, n, 2) → out (rows, n, 2), an even number of rows. */
export function complex(
  n: u32, rows: u32, inverse: bool, factors: usize, count: u32, table: usize, z: usize, out: usize, first: usize, second: usize,
): void {
  const sign = splat(inverse ? -1 : 1);
  for (let row: u32 = 0; row < rows; row += 2) {
    const shift = <usize>(row * n) << 4, next = <usize>n << 4;
    for (let j: u32 = 0; j < n; j++) {
      const at = z + shift + (<usize>j << 4);
      keep(first, j, pair(at, at + next), mul(sign, pair(at + 8, at + next + 8)));
    }
    const done = transform(n, factors, count, table, first, second) ? second : first;
    for (let j: u32 = 0; j < n; j++) {
      const at = out + shift + (<usize>j << 4);
      split(at, at + next, re(done, j), mul(sign, im(done, j)));
    }
  }
}

/** Each row of x (rows, n) less its first value, in place; and the variance of each row about its mean. */
export function departures(n: u32, rows: u32, x: usize, variance: usize): void {
  for (let row: u32 = 0; row < rows; row++) {
    const at = x + (<usize>(row * n) << 3);
    const first = load<f64>(at);
    const v = splat(first);
    let sums = splat(0), squares = splat(0);
    let j: u32 = 0;
    for (; j + 2 <= n; j += 2) {
      const here = at + (<usize>j << 3);
      const d = sub(v128.load(here), v);
      v128.store(here, d);
      sums = add(sums, d);
      squares = add(squares, mul(d, d));
    }
    let sum = f64x2.extract_lane(sums, 0) + f64x2.extract_lane(sums, 1);
    let square = f64x2.extract_lane(squares, 0) + f64x2.extract_lane(squares, 1);
    if (j < n) {
      const d = load<f64>(at + (<usize>j << 3)) - first;
      store<f64>(at + (<usize>j << 3), d);
      sum += d;
      square += d * d;
    }
    const mean = sum / n;
    const spread = square / n - mean * mean;
    // A NaN stays: only what is under nothing becomes nothing.
    store<f64>(variance + (<usize>row << 3), spread < 0 ? 0 : spread);
  }
}
