import { expect, test } from "vitest";
import { choleskyFactor, solveCholesky } from "../../../core/background/annual-cycle.ts";
import {
  backgroundAt,
  backgroundPart,
  backgroundTimes,
  fitBackground,
  needsPass,
} from "../../../core/background/background.ts";
import { runningMeanHalo } from "../../../core/background/running-mean.ts";
import type { BackgroundSpec } from "../../../core/background/spec.ts";
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
