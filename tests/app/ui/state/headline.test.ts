import { expect, test } from "vitest";
import { headline } from "../../../../app/ui/reading/headline.ts";
import { ridgeNearest, WaveSeries } from "../../../../app/ui/reading/wave-series.ts";
import { reasonCode } from "../../../../core/field/reasons.ts";
import type { Result } from "../../../../core/recipe/recipe.ts";
import { dailySteps, recordSteps } from "./fields.ts";

interface Numbers {
  readonly amplitude: number[];
  readonly ridge: number[];
  readonly share?: number[];
  readonly drift?: number[];
  readonly error?: number[];
  readonly reasons?: number[];
}

/** Waves 1 to 3 over some steps, each list row-major (steps, waves). */
function series(numbers: Numbers, first = 0): WaveSeries {
  const steps = numbers.amplitude.length / 3;
  const filled = (list: number[] | undefined): Float64Array =>
    Float64Array.from({ length: 3 * steps }, (_, i) => list?.[i] ?? Number.NaN);
  const variable = (name: string, list: number[] | undefined, reasons?: number[]) => ({
    name,
    title: name,
    units: "",
    dims: ["time", "band", "wavenumber"],
    shape: [steps, 1, 3],
    data: filled(list),
    ...(reasons === undefined ? {} : { reasons: Uint8Array.from(reasons) }),
  });
  const result = {
    coordinates: [{ name: "wavenumber", values: Float64Array.of(1, 2, 3), units: "1" }],
    variables: [
      variable("amplitude", numbers.amplitude),
      variable("ridge_longitude", numbers.ridge),
      variable("variance_share", numbers.share),
      variable("drift", numbers.drift, numbers.reasons),
      variable("drift_error", numbers.error),
    ],
  } as unknown as Result;
  return new WaveSeries(result, [first, first + steps]);
}

const TWO_DAYS: Numbers = {
  amplitude: [60, 100, 273, 62, 121, 308],
  ridge: [9, 158, 100, 9, 158, 106],
  share: [0, 0, 0, 0.03, 0.12, 0.81],
  drift: [0, 0, 0, -4.1, 6.8, 6.9],
  error: [1, 1, 1, 4.5, 1.6, 1.1],
};
const said = (numbers: Numbers, steps = dailySteps(60)) =>
  headline(series(numbers, 38), steps, 39, [55, 55], "gpm", -17.5);

test("the sentence names the leader, its size, its ridge nearest the cursor, and where it goes", () => {
  expect(said(TWO_DAYS)?.main).toBe("k 3 leads at 55°N: 308 gpm, ridge 14°W, drifting east 7° a day");
  expect(said(TWO_DAYS)?.second).toBe(
    "It carries 81 % of the variance and has grown by 35 gpm since yesterday; k 2 and k 1 follow with 121 and 62 gpm.",
  );
});

test("a wave that moves less than its error stands still; one that cannot be told says so", () => {
  expect(said({ ...TWO_DAYS, drift: [0, 0, 0, 0, 0, 0.9] })?.main).toMatch(/ridge 14°W, standing still$/);
  expect(said({ ...TWO_DAYS, drift: [0, 0, 0, 0, 0, -3] })?.main).toMatch(/drifting west 3° a day$/);
  const code = reasonCode("ambiguous");
  expect(said({ ...TWO_DAYS, reasons: [0, 0, 0, 0, 0, code] })?.main).toMatch(/its drift unclear$/);
  expect(said({ ...TWO_DAYS, drift: [] })?.main).toMatch(/ridge 14°W$/);
});

test("waves under a tenth of the leader do not follow", () => {
  const alone = said({ ...TWO_DAYS, amplitude: [1, 1, 308, 1, 1, 308] });
  expect(alone?.second).toBe(
    "It carries 81 % of the variance and has not changed since yesterday; no other wave comes near.",
  );
  const one = said({ ...TWO_DAYS, amplitude: [1, 1, 320, 1, 40, 308] });
  expect(one?.second).toContain("has weakened by 12 gpm since yesterday; k 2 follows with 40 gpm.");
});

test("a record that is no time knows no yesterday", () => {
  expect(said(TWO_DAYS, recordSteps(60))?.second).toContain("since the month before");
});

test("steps without numbers give no sentence", () => {
  expect(said({ ...TWO_DAYS, amplitude: [1, 1, 1, Number.NaN, Number.NaN, Number.NaN] })).toBe(null);
  expect(headline(series(TWO_DAYS, 38), dailySteps(60), 50, [55, 55], "gpm", 0)).toBe(null);
});

test("of the ridges every 360°/k the one nearest the cursor is told", () => {
  expect(ridgeNearest(106, 3, -17.5)).toBe(-14);
  expect(ridgeNearest(9, 1, -170)).toBe(9);
  expect(ridgeNearest(158, 2, -17.5)).toBe(-22);
  expect(ridgeNearest(10, 4, 179)).toBe(-170); // 190°E is 11° from 179°E, 100°E is 79°
  expect(ridgeNearest(Number.NaN, 2, 0)).toBeNaN();
});
