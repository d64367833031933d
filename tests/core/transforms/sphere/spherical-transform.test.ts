import { readFileSync } from "node:fs";
import { describe, expect, test } from "vitest";
import { gaussianRows } from "../../../../core/transforms/sphere/gaussian.ts";
import { epsilon, pairCount, place } from "../../../../core/transforms/sphere/legendre.ts";
import { SphericalTransform } from "../../../../core/transforms/sphere/spherical-transform.ts";

interface Mode {
  readonly rows: number;
  readonly columns: number;
  readonly n: number;
  readonly m: number;
  /** Row from the south, column, real and imaginary part of Y. */
  readonly values: readonly (readonly [number, number, number, number])[];
}
// Written by reference/make_modes.py: scipy.special.sph_harm_y.
const MODES = JSON.parse(readFileSync(new URL("reference/modes.json", import.meta.url), "utf8")) as Mode[];
// Written by tests/core/grid/reference/make_gauss.py: numpy.polynomial.legendre.leggauss.
const GAUSS = JSON.parse(readFileSync(new URL("../../grid/reference/gauss.json", import.meta.url), "utf8")) as Record<
  string,
  { latitudes: number[]; weights: number[] }
>;

/** Pseudo-random numbers in [−1, 1): any numbers will do, but the same ones each time. */
function numbers(count: number): Float64Array {
  let state = 12_345;
  return Float64Array.from({ length: count }, () => {
    state = (Math.imul(state, 1_103_515_245) + 12_345) >>> 0;
    return state / 2 ** 31 - 1;
  });
}

/** Coefficients of a real field: those of m = 0 are real. */
function realCoefficients(T: number): Float64Array {
  const c = numbers(2 * pairCount(T));
  for (let n = 0; n <= T; n++) c[2 * place(0, n, T) + 1] = 0;
  return c;
}

test.each(MODES)("Y of n = $n, m = $m on $rows rows is scipy's", ({ rows, columns, n, m, values }) => {
  const T = Math.min(rows - 1, Math.floor((columns - 1) / 2));
  const transform = new SphericalTransform(T, rows, columns);
  // The recurrence in n multiplies and adds n times; values are up to √(2n + 1): n · 8 · 2⁻⁵³ · √(2n + 1), and scipy's own as much.
  const limit = (n + 4) * 32 * 2 ** -53 * Math.sqrt(2 * n + 1);
  for (const part of [0, 1] as const) {
    if (m === 0 && part === 1) continue;
    const c = new Float64Array(2 * pairCount(T));
    c[2 * place(m, n, T) + part] = 1;
    const field = transform.synthesis(c);
    // ±m both counted: a coefficient c gives 2 Re(c Y) for m > 0.
    const times = m === 0 ? 1 : 2;
    for (const [j, i, re, im] of values) {
      const want = times * (part === 0 ? re : -im);
      const got = field[j * columns + i] as number;
      expect(Math.abs(got - want), `row ${j}, column ${i}: ${got}, should be ${want}`).toBeLessThanOrEqual(2 * limit);
    }
  }
});

describe("there and back", () => {
  test.each([
    [21, 22, 43],
    [21, 32, 64],
    [42, 43, 90],
    [42, 64, 128],
    [106, 160, 320],
  ])("T%d on %d Gaussian rows and %d columns: 1e-12 (methods' bound for the exact range)", (T, rows, columns) => {
    const transform = new SphericalTransform(T, rows, columns);
    const c = realCoefficients(T);
    const back = transform.analysis(transform.synthesis(c));
    let worst = 0;
    c.forEach((value, i) => {
      worst = Math.max(worst, Math.abs(value - (back[i] as number)));
    });
    // Fields of that many coefficients of size 1 reach some hundreds: relative to the largest value.
    const most = transform.synthesis(c).reduce((a, b) => Math.max(a, Math.abs(b)), 0);
    expect(worst / most).toBeLessThan(1e-12);
  });

  test("Parseval: the mean of a field's square is the sum of its coefficients' squares, ±m both counted", () => {
    const transform = new SphericalTransform(21, 32, 64);
    const c = realCoefficients(21);
    const field = transform.synthesis(c);
    let mean = 0;
    for (let j = 0; j < 32; j++)
      for (let i = 0; i < 64; i++)
        mean += ((transform.weights[j] as number) / 2 / 64) * (field[j * 64 + i] as number) ** 2;
    let sum = 0;
    for (let m = 0, i = 0; m <= 21; m++)
      for (let n = m; n <= 21; n++, i++)
        sum += (m === 0 ? 1 : 2) * ((c[2 * i] as number) ** 2 + (c[2 * i + 1] as number) ** 2);
    expect(Math.abs(mean / sum - 1)).toBeLessThan(2048 * 8 * 2 ** -53); // 2048 products and sums
  });
});

test("Gaussian rows and weights are numpy's", () => {
  for (const [rows, { latitudes, weights }] of Object.entries(GAUSS)) {
    const own = gaussianRows(Number(rows));
    latitudes.forEach((latitude, j) => {
      expect(Math.abs((own.sines[j] as number) - Math.sin((latitude * Math.PI) / 180))).toBeLessThan(8 * 2 ** -53);
      // A weight is 2(1 − x²)/(n P)²; next to the pole 1 − x² is some 2.6/n², so that the rounding of x counts n² times. numpy's own
      // are tested to degree 100 only (its documentation), so finer grids are held to the integrals below.
      if (Number(rows) <= 128)
        expect(Math.abs((own.weights[j] as number) / (weights[j] as number) - 1)).toBeLessThan(
          Number(rows) ** 2 * 16 * 2 ** -53,
        );
    });
    // 2, the length of −1 … 1
    expect(Math.abs(own.weights.reduce((a, b) => a + b, 0) - 2)).toBeLessThan(Number(rows) * 16 * 2 ** -53);
    // ∫x²ᵏ dx over −1 … 1 is 2/(2k + 1), exact for 2k < 2 · rows
    for (const k of [1, 2, 3]) {
      const sum = own.weights.reduce((total, w, j) => total + w * (own.sines[j] as number) ** (2 * k), 0);
      expect(Math.abs(sum - 2 / (2 * k + 1))).toBeLessThan(Number(rows) * 16 * 2 ** -53);
    }
  }
});

test("places and ε are the definition's", () => {
  const seen = new Set<number>();
  for (let m = 0; m <= 42; m++) for (let n = m; n <= 42; n++) seen.add(place(m, n, 42));
  expect(seen.size).toBe(pairCount(42));
  expect(Math.max(...seen)).toBe(pairCount(42) - 1);
  expect(epsilon(0, 1)).toBe(Math.sqrt(1 / 3));
  expect(epsilon(3, 3)).toBe(0);
});

test("a grid on which analysis is not exact is refused, with what it would take", () => {
  expect(() => new SphericalTransform(42, 42, 128)).toThrow(
    "Truncation T42 needs 43 Gaussian rows and 85 columns at least; this grid has 42 and 128",
  );
  expect(() => new SphericalTransform(42, 64, 84)).toThrow("Truncate lower");
});
