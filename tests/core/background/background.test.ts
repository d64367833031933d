import { expect, test } from "vitest";
import { choleskyFactor, solveCholesky } from "../../../core/background/annual-cycle.ts";
import {
  backgroundAt,
  backgroundPart,
  backgroundTimes,
  fitBackground,
  needsPass,
} from "../../../core/background/background.ts";
import { runningMean, runningMeanHalo } from "../../../core/background/running-mean.ts";
import type { BackgroundSpec } from "../../../core/background/spec.ts";
import type { StepAxis } from "../../../core/field/axes.ts";
import type { Slab } from "../../../core/field/slab.ts";
import { dailySteps } from "../diagnostics/run-diagnostic.ts";

const grid = { lat: Float64Array.of(50, 60), lon: Float64Array.of(0, 10, 20), closesCircle: false };
const steps = dailySteps(730, 11_323); // from 2001-01-01, two years
const value = (t: number, cell: number): number => 100 + cell + 3 * Math.cos((2 * Math.PI * t) / 365) + 0.01 * t;

function slab(from: number, to: number, hole = -1): Slab {
  const data = new Float64Array((to - from) * 6);
  for (let t = from; t < to; t++)
    for (let c = 0; c < 6; c++) data[(t - from) * 6 + c] = t === hole && c === 4 ? Number.NaN : value(t, c);
  return { quantity: null, units: "gpm", data, shape: [to - from, 1, 2, 3] };
}

test("which backgrounds need a pass over the record", () => {
  const specs: BackgroundSpec[] = [
    { kind: "none" },
    { kind: "record-mean" },
    { kind: "period-mean", from: "2001-01-01", to: "2001-02-01" },
    { kind: "annual-cycle", harmonics: 2 },
    { kind: "running-mean", days: 9 },
  ];
  expect(specs.map(needsPass)).toEqual([false, true, true, true, false]);
});

test("a mean over a period is over its days, both included", () => {
  const spec: BackgroundSpec = { kind: "period-mean", from: "2001-01-11", to: "2001-01-20" };
  const times = backgroundTimes(spec, steps);
  expect(times).toEqual([10, 20]);
  const fitted = fitBackground(
    [backgroundPart(spec, slab(10, 20), steps, [10, 20])],
    { steps, background: spec, grid },
    [0, 2],
  );
  const want = Array.from({ length: 10 }, (_, i) => value(10 + i, 2)).reduce((a, b) => a + b, 0) / 10;
  // Ten terms of 105, each rounded
  expect(Math.abs((fitted.coefficients[2] as number) - want)).toBeLessThan(10 * 105 * 2 ** -52);
  expect(() => backgroundTimes({ ...spec, from: "1990-01-01", to: "1990-02-01" }, steps)).toThrow("no step lies");
});

test("the annual cycle that was put in comes out on any step, and some rows of it are those rows", () => {
  const spec: BackgroundSpec = { kind: "annual-cycle", harmonics: 1 };
  const noTrend = (from: number, to: number): Slab => {
    const one = slab(from, to);
    return { ...one, data: one.data.map((x, i) => x - 0.01 * (from + Math.floor(i / 6))) };
  };
  const parts = [
    backgroundPart(spec, noTrend(0, 300), steps, [0, 300]),
    backgroundPart(spec, noTrend(300, 730), steps, [300, 730]),
  ];
  const fitted = fitBackground(parts, { steps, background: spec, grid }, [0, 2]);
  const at = backgroundAt(fitted, steps, [500, 502], [0, 2]);
  // 730 sums of 106 and the solution of a well-conditioned 3 × 3 system
  for (let t = 0; t < 2; t++)
    for (let c = 0; c < 6; c++)
      expect(Math.abs((at[6 * t + c] as number) - (value(500 + t, c) - 0.01 * (500 + t)))).toBeLessThan(
        730 * 110 * 2 ** -50,
      );
  expect([...backgroundAt(fitted, steps, [500, 501], [1, 2])]).toEqual([...at.slice(3, 6)]);
});

test("parts add up to what one pass gives, whichever of them has the gap", () => {
  const spec: BackgroundSpec = { kind: "annual-cycle", harmonics: 2 };
  const coefficientsOf = (cuts: readonly number[]) =>
    fitBackground(
      cuts
        .slice(1)
        .map((to, i) => backgroundPart(spec, slab(cuts[i] as number, to, 5), steps, [cuts[i] as number, to])),
      { steps, background: spec, grid },
      [0, 2],
    ).coefficients;
  const [whole, cut] = [coefficientsOf([0, 730]), coefficientsOf([0, 4, 200, 730])];
  // The same sums in another order
  whole.forEach((x, i) => {
    expect(Math.abs(x - (cut[i] as number)), `coefficient ${i}`).toBeLessThan(730 * 110 * 2 ** -50);
  });
});

test("a window is the largest odd number of steps within its days", () => {
  const half = (days: number, each: number) =>
    runningMeanHalo({ kind: "running-mean", days }, { ...steps, values: steps.values.map((_, i) => i * each) });
  expect([half(31, 1), half(30, 1), half(31, 0.25), half(3, 1)]).toEqual([15, 14, 61, 1]);
  expect(runningMeanHalo({ kind: "none" }, steps)).toBe(0);
});

test("Cholesky: a matrix by hand, and one that cannot be solved", () => {
  // [4 2; 2 3] x = [2; 5]: x = (−0.5, 2), by hand
  const factor = choleskyFactor(Float64Array.of(4, 2, 3), 2) as Float64Array;
  const b = Float64Array.of(2, 5);
  solveCholesky(factor, b);
  expect(Math.abs((b[0] as number) + 0.5)).toBeLessThan(1e-15);
  expect(Math.abs((b[1] as number) - 2)).toBeLessThan(1e-15);
  expect(choleskyFactor(Float64Array.of(1, 1, 1), 2)).toBeNull();
});

test("a background of nothing is refused", () => {
  expect(() => fitBackground([], { steps, background: { kind: "record-mean" }, grid }, [0, 2])).toThrow(
    "at least one chunk",
  );
});

test("a mean over part of a record that is no time is told by its numbers", () => {
  const months: StepAxis = { ...steps, kind: "record", name: "month", values: Float64Array.of(1, 4, 7, 10) };
  const spec: BackgroundSpec = { kind: "period-mean", from: "4", to: "7" };
  expect(backgroundTimes(spec, months)).toEqual([1, 3]);
  expect(() => backgroundTimes({ ...spec, from: "2001-01-01" }, months)).toThrow("no times");
  expect(() => backgroundTimes({ kind: "annual-cycle", harmonics: 1 }, months)).toThrow('along "month"');
  expect(() => runningMeanHalo({ kind: "running-mean", days: 3 }, months)).toThrow('along "month"');
});

test("a cycle that the steps alone rule out is refused before anything is read", () => {
  const cycle: BackgroundSpec = { kind: "annual-cycle", harmonics: 4 };
  const first = (n: number): StepAxis => ({ ...steps, values: steps.values.slice(0, n) });
  expect(() => backgroundTimes(cycle, first(8))).toThrow("needs 9 different days of the year; this record has 8");
  expect(() => backgroundTimes(cycle, first(40))).toThrow("too little of the year to tell its 4 harmonics apart");
  expect(backgroundTimes(cycle, first(90))).toEqual([0, 90]);
  // The same two days of many years are two days
  const yearly = {
    ...steps,
    calendar: "noleap",
    values: Float64Array.from({ length: 20 }, (_, i) => 365 * (i >> 1) + 30 * (i & 1)),
  } as const;
  expect(() => backgroundTimes({ kind: "annual-cycle", harmonics: 1 }, yearly)).toThrow("this record has 2");
});

test("moments with gaps are the plain sums over what is there (the definition), for any number of steps", () => {
  const spec: BackgroundSpec = { kind: "annual-cycle", harmonics: 1 };
  for (const n of [1, 3, 4, 5, 11]) {
    const one = slab(0, n);
    const x = one.data.map((value, i) => ((i * 7) % 5 === 2 ? Number.NaN : value));
    const kept = x.slice();
    const part = backgroundPart(spec, { ...one, data: x }, steps, [0, n]);
    expect(x, "the input is not modified").toEqual(kept);
    for (let i = 0; i < 3; i++)
      for (let c = 0; c < 6; c++) {
        let sum = 0;
        for (let t = 0; t < n; t++) {
          const angle = (2 * Math.PI * t) / 365;
          const basis = [1, Math.cos(angle), Math.sin(angle)][i] as number;
          if (!Number.isNaN(x[6 * t + c])) sum += basis * (x[6 * t + c] as number);
        }
        // n terms under 120, and a phase that is rounded at 11000 days: 2π · 2⁻⁵³ · 11000/365 of an angle
        expect(Math.abs((part.moments[6 * i + c] as number) - sum)).toBeLessThan(n * 120 * 2 ** -46);
      }
    for (let c = 0; c < 6; c++) {
      const lost = Array.from({ length: n }, (_, t) => x[6 * t + c]).filter(Number.isNaN).length;
      expect(part.missing[c]).toBe(lost);
    }
  }
});

test("a running mean is the mean of its window (the definition) to the same bits however the record is cut", () => {
  const n = 60;
  const whole = slab(0, n);
  whole.data[6 * 30 + 2] = Number.NaN;
  const axis = { ...steps, values: steps.values.slice(0, n) };
  for (const days of [3, 7, 15, 31, 59]) {
    const half = (days - 1) / 2;
    const spec: BackgroundSpec = { kind: "running-mean", days };
    const all = runningMean(whole, axis, [0, n], [0, n], spec);
    for (let t = 0; t < n; t++)
      for (let c = 0; c < 6; c++) {
        const got = all[6 * t + c] as number;
        let sum = 0;
        for (let s = t - half; s <= t + half; s++) sum += whole.data[6 * s + c] ?? Number.NaN;
        // Sums of `days` terms under 120, in two orders
        if (Number.isNaN(sum)) expect(got, `${days} days, step ${t}, cell ${c}`).toBeNaN();
        else
          expect(Math.abs(got - sum / days), `${days} days, step ${t}, cell ${c}`).toBeLessThan(days * 120 * 2 ** -52);
      }
    for (const [from, to] of [
      [0, 1],
      [13, 29],
      [29, 60],
    ] as const) {
      const loaded = [Math.max(0, from - half), Math.min(n, to + half)] as const;
      const piece = { ...whole, data: whole.data.slice(6 * loaded[0], 6 * loaded[1]) };
      const part = runningMean({ ...piece, shape: [loaded[1] - loaded[0], 1, 2, 3] }, axis, loaded, [from, to], spec);
      expect([...part], `${days} days, steps ${from} to ${to}`).toEqual([...all.slice(6 * from, 6 * to)]);
    }
  }
});
