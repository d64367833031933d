import { readFileSync } from "node:fs";
import { describe, expect, test } from "vitest";
import { complexTransform, realTransform } from "../../../../core/transforms/fourier/fourier.ts";
import { KERNEL } from "../../../../core/transforms/fourier/kernel.generated.ts";
import { radices, twiddles } from "../../../../core/transforms/fourier/plan.ts";
import { bytesOfBase64 } from "../../../../core/wasm/base64.ts";
import { compiledKernel, KERNELS } from "../../../../core/wasm/compile.mjs";

interface Case {
  n: number;
  sum_abs: number;
  k: number[];
  re: number[];
  im: number[];
  complex_re: number[];
  complex_im: number[];
}
const reference = JSON.parse(readFileSync(new URL("./reference/fourier.json", import.meta.url), "utf8")) as {
  cases: Case[];
};

/** The reference script's row: no random generator, so that any language makes the same. */
function row(n: number): Float64Array {
  return Float64Array.from(
    { length: n },
    (_, j) =>
      5500 +
      120 * Math.cos(2 * ((2 * Math.PI * j) / n) - 1) +
      (50 * ((j * 7919) % 101)) / 101 -
      (25 * ((j * j) % 37)) / 37,
  );
}

/** Worst |a − b|, with its place. */
function worst(a: ArrayLike<number>, b: ArrayLike<number>): { i: number; a: number; b: number; off: number } {
  let found = { i: -1, a: 0, b: 0, off: 0 };
  for (let i = 0; i < a.length; i++) {
    const off = Math.abs((a[i] as number) - (b[i] as number));
    if (!(off <= found.off)) found = { i, a: a[i] as number, b: b[i] as number, off };
  }
  return found;
}
function expectClose(a: ArrayLike<number>, b: ArrayLike<number>, limit: number, words: string): void {
  const found = worst(a, b);
  expect(
    found.off,
    `${words}: number ${found.i} is ${found.a}, should be ${found.b}, limit ${limit}`,
  ).toBeLessThanOrEqual(limit);
}

/**
 * Rounding of a transform: each of its stages adds at most a few units in the last place of the running sums, which are at
 * most Σ|x|; a prime factor p sums p terms in a row. 2⁻⁵³ · (8 per stage + 2 p) · Σ|x| bounds both sides' errors together.
 */
function bound(n: number, sumAbs: number): number {
  const stages = radices(n);
  return 2 ** -53 * (8 * (stages.length + 2) + 2 * Math.max(...stages)) * sumAbs;
}

describe.each(["wasm", "plain"] as const)("%s kernel", (kernel) => {
  test("is the one that runs", () => {
    expect(realTransform(144, kernel).kernel).toBe(kernel);
    expect(complexTransform(144, kernel).kernel).toBe(kernel);
  });

  // numpy.fft.rfft and scipy.fft.fft, by reference/make_reference.py
  test.each(reference.cases)(
    "agrees with numpy and scipy at length $n",
    ({ n, sum_abs, k, re, im, complex_re, complex_im }) => {
      const waves = Math.floor(n / 2) + 1;
      const x = row(n);
      const out = new Float64Array(2 * waves);
      realTransform(n, kernel).forward(x, 1, out, waves);
      expectClose(
        k.flatMap((i) => [out[2 * i] as number, out[2 * i + 1] as number]),
        k.flatMap((_, i) => [re[i] as number, im[i] as number]),
        bound(n, sum_abs),
        `real ${n}`,
      );
      const z = new Float64Array(2 * n);
      for (let j = 0; j < n; j++) z.set([x[j] as number, 0.5 * (x[n - 1 - j] as number)], 2 * j);
      const full = new Float64Array(2 * n);
      complexTransform(n, kernel).forward(z, 1, full);
      expectClose(
        k.flatMap((i) => [full[2 * i] as number, full[2 * i + 1] as number]),
        k.flatMap((_, i) => [complex_re[i] as number, complex_im[i] as number]),
        bound(n, 1.5 * sum_abs),
        `complex ${n}`,
      );
    },
  );

  test("is the direct sum, at every length to 128", () => {
    for (let n = 8; n <= 128; n++) {
      const x = row(n);
      const waves = Math.floor(n / 2) + 1;
      const out = new Float64Array(2 * waves);
      realTransform(n, kernel).forward(x, 1, out, waves);
      const table = twiddles(n);
      const direct = new Float64Array(2 * waves);
      for (let k = 0; k < waves; k++)
        for (let j = 0; j < n; j++) {
          const w = 2 * ((j * k) % n);
          direct[2 * k] = (direct[2 * k] as number) + (x[j] as number) * (table[w] as number);
          direct[2 * k + 1] = (direct[2 * k + 1] as number) + (x[j] as number) * (table[w + 1] as number);
        }
      // The direct sum itself adds n terms of at most Σ|x| one by one.
      expectClose(out, direct, bound(n, 5700 * n) + 2 ** -53 * n * 5700 * n, `length ${n}`);
    }
  });

  // Errors of the coefficients, each at most bound(Σ|x|), average out to no more in the sum over k; the inverse adds as much again.
  test("forward and inverse give n times the row, with every wave", () => {
    for (const n of [8, 9, 15, 49, 73, 144, 145, 240, 361, 480, 1440]) {
      const x = row(n);
      const waves = Math.floor(n / 2) + 1;
      const c = new Float64Array(2 * waves);
      const back = new Float64Array(n);
      const { forward, inverse } = realTransform(n, kernel);
      forward(x, 1, c, waves);
      inverse(c, 1, back, waves);
      expectClose(
        back.map((v) => v / n),
        x,
        2 * bound(n, 5700 * n),
        `length ${n}`,
      );
      const z = Float64Array.from({ length: 2 * n }, (_, i) => ((i * 31) % 17) - 8);
      const f = new Float64Array(2 * n);
      const zBack = new Float64Array(2 * n);
      const whole = complexTransform(n, kernel);
      whole.forward(z, 1, f);
      whole.inverse(f, 1, zBack);
      expectClose(
        zBack.map((v) => v / n),
        z,
        2 * bound(n, 12 * n),
        `complex ${n}`,
      );
    }
  });

  test("few waves are the first of many, and few coefficients the sum of few waves", () => {
    const n = 144;
    const x = row(n);
    const all = new Float64Array(146);
    const few = new Float64Array(14);
    const transform = realTransform(n, kernel);
    transform.forward(x, 1, all, 73);
    transform.forward(x, 1, few, 7);
    expect([...few]).toEqual([...all.subarray(0, 14)]);
    const out = new Float64Array(n);
    transform.inverse(Float64Array.of(3, 99, 1, 0, 0, -0.5), 1, out, 3);
    const byHand = Float64Array.from(
      { length: n },
      (_, j) => 3 + 2 * Math.cos((2 * Math.PI * j) / n) + Math.sin((4 * Math.PI * j) / n),
    );
    expectClose(out, byHand, 2 ** -53 * 64 * 6, "three waves");
  });

  test("rows are apart: any number of them, and a NaN spoils its own alone", () => {
    for (const n of [73, 144]) {
      for (const rows of [1, 2, 3, 5, 64, 257]) {
        const x = new Float64Array(rows * n);
        for (let r = 0; r < rows; r++)
          x.set(
            row(n).map((v) => v * (1 + r)),
            r * n,
          );
        const spoiled = rows > 1 ? 1 : 0;
        x[spoiled * n + 5] = Number.NaN;
        const before = x.slice();
        const out = new Float64Array(rows * 14);
        realTransform(n, kernel).forward(x, rows, out, 7);
        expect(x).toEqual(before);
        const one = new Float64Array(14);
        for (let r = 0; r < rows; r++) {
          const mine = out.subarray(14 * r, 14 * r + 14);
          if (r === spoiled) {
            expect(mine.every(Number.isNaN)).toBe(true);
            continue;
          }
          realTransform(n, kernel).forward(x.slice(r * n, (r + 1) * n), 1, one, 7);
          expect([...mine]).toEqual([...one]);
        }
      }
    }
  });

  test("sizes that do not fit are refused", () => {
    expect(() => realTransform(7, kernel)).toThrow("lengths from 8 to 2880");
    expect(() => realTransform(2881, kernel)).toThrow("lengths from 8 to 2880");
    expect(() => complexTransform(10.5, kernel)).toThrow("lengths from 8 to 2880");
    const real = realTransform(16, kernel);
    expect(() => real.forward(new Float64Array(16), 1, new Float64Array(20), 10)).toThrow("there are 1 to 9");
    expect(() => real.forward(new Float64Array(15), 1, new Float64Array(18), 9)).toThrow(
      "x has 15 numbers; 16 are needed",
    );
    expect(() => real.forward(new Float64Array(16), 1, new Float64Array(17), 9)).toThrow("out has 17");
    expect(() => real.inverse(new Float64Array(17), 1, new Float64Array(16), 9)).toThrow("c has 17");
    expect(() => real.inverse(new Float64Array(18), 1, new Float64Array(15), 9)).toThrow("out has 15");
    expect(() => complexTransform(16, kernel).forward(new Float64Array(31), 1, new Float64Array(32))).toThrow(
      "z has 31",
    );
    expect(() => complexTransform(16, kernel).inverse(new Float64Array(32), 1, new Float64Array(31))).toThrow(
      "out has 31",
    );
  });
});

test("kernel and twin agree to 1e-13 of the row's size, at every length to 400 and many beyond", () => {
  const lengths = Array.from({ length: 393 }, (_, i) => i + 8);
  for (let n = 401; n <= 2880; n += 61) lengths.push(n);
  lengths.push(480, 512, 720, 960, 1000, 1024, 1280, 1440, 1536, 1920, 2048, 2160, 2304, 2500, 2560, 2880);
  for (const n of lengths) {
    const waves = Math.floor(n / 2) + 1;
    const x = row(n);
    const a = new Float64Array(2 * waves);
    const b = new Float64Array(2 * waves);
    realTransform(n, "wasm").forward(x, 1, a, waves);
    realTransform(n, "plain").forward(x, 1, b, waves);
    const size = x.reduce((sum, v) => sum + Math.abs(v), 0);
    expectClose(a, b, 1e-13 * size, `length ${n}`);
    const ra = new Float64Array(n);
    const rb = new Float64Array(n);
    realTransform(n, "wasm").inverse(a, 1, ra, waves);
    realTransform(n, "plain").inverse(a, 1, rb, waves);
    expectClose(ra, rb, 1e-13 * size, `inverse ${n}`);
  }
});

test("the table's circle is exact where it can be", () => {
  const table = twiddles(8);
  const half = Math.SQRT1_2;
  // cos and sin of whole eighths, to the last place
  expectClose(
    table,
    [1, 0, half, -half, 0, -1, -half, -half, -1, 0, -half, half, 0, 1, half, half],
    2 ** -53,
    "eighths",
  );
  for (const n of [9, 144, 2879]) {
    const w = twiddles(n);
    for (let k = 1; k < n; k++) {
      expect((w[2 * k] as number) === w[2 * (n - k)]).toBe(true);
      expect((w[2 * k + 1] as number) === -(w[2 * (n - k) + 1] as number)).toBe(true);
    }
  }
});

test("radices multiply to the length", () => {
  for (let n = 8; n <= 2880; n++) expect(radices(n).reduce((a, b) => a * b, 1)).toBe(n);
});

test("the committed kernel is what its source compiles to", async () => {
  const fresh = await compiledKernel(KERNELS.Fourier);
  expect(Buffer.from(bytesOfBase64(KERNEL)).equals(Buffer.from(fresh))).toBe(true);
});

test("base64 is decoded as Node does", () => {
  for (const text of ["", "f", "fo", "foo", "foob", "fooba", "foobar"]) // RFC 4648 §10
    expect(Buffer.from(bytesOfBase64(Buffer.from(text).toString("base64"))).toString()).toBe(text);
});

test.each(["wasm", "plain"] as const)("%s: departures from a row's first value, and its variance", (kernel) => {
  for (const n of [9, 144, 241]) {
    const rows = 5;
    const x = new Float64Array(rows * n);
    for (let r = 0; r < rows - 1; r++) for (let j = 0; j < n; j++) x[r * n + j] = 5500 + 100 * r + row(n)[(j + r) % n]!;
    x.fill(Number.NaN, (rows - 1) * n, (rows - 1) * n + 1);
    const waves = 4;
    const out = new Float64Array(2 * rows * waves);
    const variance = new Float64Array(rows);
    const kept = x.slice();
    realTransform(n, kernel).departures(x, rows, out, waves, variance);
    expect(x).toEqual(kept);
    for (let r = 0; r < rows - 1; r++) {
      const own = x.slice(r * n, (r + 1) * n);
      const mean = own.reduce((sum, value) => sum + value, 0) / n;
      const direct = own.reduce((sum, value) => sum + (value - mean) ** 2, 0) / n;
      // Two sums of n squares, each term rounded three times, n terms added: n · 4 · 2⁻⁵³ of Σd²/n, d up to the row's range.
      const range = Math.max(...own) - Math.min(...own);
      expect(Math.abs((variance[r] as number) - direct)).toBeLessThanOrEqual(8 * n * 2 ** -53 * range * range);
      const shifted = own.map((value) => value - (own[0] as number));
      const want = new Float64Array(2 * waves);
      realTransform(n, kernel).forward(shifted, 1, want, waves);
      expectClose(out.subarray(2 * r * waves, 2 * (r + 1) * waves), want, 0, `n ${n}, row ${r}`);
    }
    expect(variance[rows - 1]).toBeNaN();
    expect(out[2 * (rows - 1) * waves]).toBeNaN();
  }
  const short = new Float64Array(1);
  expect(() => realTransform(9, kernel).departures(new Float64Array(18), 2, new Float64Array(8), 2, short)).toThrow(
    "variance has 1 numbers; 2 are needed",
  );
});
