import { readFileSync } from "node:fs";
import { expect, test } from "vitest";
import { climatology } from "../../../core/diagnostics/climatology.ts";
import { daysOf } from "../../../core/field/calendar.ts";
import { reasonCode } from "../../../core/field/reasons.ts";
import { type Cube, dailySteps, numbers, runOn, variable } from "./run-diagnostic.ts";

// By numpy.linalg.lstsq, nanmean and convolve: reference/make_reference.py
const reference = JSON.parse(readFileSync(new URL("./reference/waves.json", import.meta.url), "utf8")).climatology;

/** Least squares on 365 values of 260 with a well-conditioned basis: 365 · 260 · 2⁻⁵³ a sum, times a condition number under 4. */
const LIMIT = 8 * 365 * 260 * 2 ** -53;
const NO_LEAP_START = daysOf({ year: 2001, month: 1, day: 1 }, "noleap");

/** The reference script's year: two cells, the second with gaps. */
function year(): Cube {
  const values = new Float64Array(365 * 2);
  for (let d = 0; d < 365; d++) {
    const phase = d / 365;
    const y = 250 + 8 * Math.cos(2 * Math.PI * (phase - 0.1)) + 2 * Math.sin(4 * Math.PI * phase) + ((d * 37) % 11) - 5;
    values[2 * d] = y;
    values[2 * d + 1] = (d * 7) % 19 === 3 ? Number.NaN : y;
  }
  return {
    values,
    lat: Float64Array.of(50),
    lon: Float64Array.of(0, 10),
    steps: { ...dailySteps(365, NO_LEAP_START), calendar: "noleap" },
    levels: null,
  };
}

function expectClose(got: number | undefined, want: number, limit: number): void {
  expect(Math.abs((got ?? Number.NaN) - want) <= limit, `${got}, should be ${want}, limit ${limit}`).toBe(true);
}

test("means and counts are numpy's, with gaps", () => {
  const out = runOn(climatology, year(), {}, { kind: "none" }, [100, 101]);
  expectClose(variable(out, "mean").data[1], reference.mean_gappy, LIMIT);
  expect(numbers(variable(out, "count"))).toEqual([365, 365 - 19]);
  expect(variable(out, "mean").dims).toEqual(["latitude", "longitude"]);
});

test("harmonics of the year are numpy's least squares, whole and with gaps", () => {
  const full = runOn(climatology, year(), { mean: "annual-cycle", harmonics: 4 }, { kind: "none" }, [50, 200]);
  expectClose(variable(full, "mean").data[0], reference.full[0], LIMIT);
  for (let h = 1; h <= 4; h++) {
    const [a, b] = [reference.full[2 * h - 1], reference.full[2 * h]] as [number, number];
    expectClose(variable(full, "amplitude").data[2 * (h - 1)], Math.hypot(a, b), LIMIT);
    const peak = (((Math.atan2(b, a) / (2 * Math.PI) / h) % (1 / h)) + 1 / h) % (1 / h);
    expectClose(variable(full, "peak").data[2 * (h - 1)], peak, LIMIT / Math.hypot(a, b));
  }
  const gappy = runOn(climatology, year(), { mean: "annual-cycle", harmonics: 2 });
  expectClose(variable(gappy, "mean").data[1], reference.gappy[0], LIMIT);
  expectClose(variable(gappy, "amplitude").data[1], Math.hypot(reference.gappy[1], reference.gappy[2]), LIMIT);
  expectClose(variable(gappy, "amplitude").data[3], Math.hypot(reference.gappy[3], reference.gappy[4]), LIMIT);
});

test("the cycle is written in the middles of equal parts of the year", () => {
  const out = runOn(climatology, year(), { mean: "annual-cycle", harmonics: 4 });
  const cycle = variable(out, "cycle");
  expect(cycle.dims).toEqual(["part_of_year", "latitude", "longitude"]);
  expect(cycle.shape).toEqual([12, 1, 2]);
  const parts = out.coordinates.find(({ name }) => name === "part_of_year")?.values ?? [];
  for (let p = 0; p < 12; p++) {
    expectClose(cycle.data[2 * p], reference.cycle[p], LIMIT);
    expectClose(parts[p], (p + 0.5) / 12, 2 ** -52);
  }
  const gappy = variable(runOn(climatology, year(), { mean: "annual-cycle", harmonics: 2, cycle_points: 5 }), "cycle");
  for (let p = 0; p < 5; p++) expectClose(gappy.data[2 * p + 1], reference.cycle_gappy[p], LIMIT);
  const none = runOn(climatology, year(), { mean: "annual-cycle", cycle_points: 0 });
  expect(none.variables.map(({ name }) => name)).toEqual(["mean", "count", "amplitude", "peak"]);
  expect(none.coordinates.map(({ name }) => name)).not.toContain("part_of_year");
});

test("a season's record says for which part of the year its cycle holds; one too short to tell is refused", () => {
  const season = (days: number): Cube => ({
    ...year(),
    values: year().values.slice(0, 2 * days),
    steps: { ...year().steps, values: year().steps.values.slice(0, days) },
  });
  expect(runOn(climatology, year(), { mean: "annual-cycle" }).notes).toEqual([]);
  // 120 days leave out (365 − 119)/365 of the year
  const some = runOn(climatology, season(120), { mean: "annual-cycle", harmonics: 2 });
  expect(some.notes.join()).toContain("leaves out 67 % of the year");
  // On 40 days the nine basis functions are alike to within the rounding of their sums: no pivot over 1e-10
  expect(() => runOn(climatology, season(40), { mean: "annual-cycle", harmonics: 4 })).toThrow(
    "too little of the year",
  );
});

test("a cell without values is missing, one with too few is too short", () => {
  const cube = year();
  const blank = { ...cube, values: cube.values.map((x, i) => (i % 2 === 0 || i < 12 ? x : Number.NaN)) };
  const empty = { ...cube, values: cube.values.map((x, i) => (i % 2 === 0 ? x : Number.NaN)) };
  for (const [gaps, why] of [
    [blank, "short"],
    [empty, "missing"],
  ] as const) {
    const out = runOn(climatology, gaps, { mean: "annual-cycle", harmonics: 4, cycle_points: 3 });
    for (const name of ["mean", "amplitude", "peak", "cycle"]) {
      const one = variable(out, name);
      expect(Array.from(one.reasons ?? []), name).toEqual(
        Array.from(one.data, (_, i) => (i % 2 === 0 ? 0 : reasonCode(why))),
      );
    }
  }
});

test("a running mean of over a million numbers is kept as float32, and says so", () => {
  const [nTime, nLat, nLon] = [200, 71, 72];
  const lat = Float64Array.from({ length: nLat }, (_, j) => j - 35);
  const lon = Float64Array.from({ length: nLon }, (_, i) => 5 * i);
  const values = Float64Array.from({ length: nTime * nLat * nLon }, (_, i) => (i * 37) % 101);
  const cube: Cube = { values, lat, lon, steps: dailySteps(nTime), levels: null };
  const out = runOn(climatology, cube, { mean: "running-mean", days: 3 }, { kind: "none" }, [90]);
  const { data } = variable(out, "mean");
  expect(data).toBeInstanceOf(Float32Array);
  expect(out.notes.join()).toContain("float32");
  const cells = nLat * nLon;
  // Whole numbers under 101: their mean, rounded once to 24 bits
  for (const i of [cells, 91 * cells + 17, 198 * cells + cells - 1])
    expectClose(data[i], (values[i - cells] + values[i] + values[i + cells]) / 3, 101 * 2 ** -24);
});

test("a running mean is numpy's convolution; the ends are left out, not invented", () => {
  const cube = year();
  const out = runOn(climatology, cube, { mean: "running-mean", days: 31 }, { kind: "none" }, [3, 40, 300]);
  const mean = variable(out, "mean");
  for (let i = 0; i < 5; i++) expectClose(mean.data[2 * (15 + i)], reference.running[i], LIMIT);
  expect(mean.reasons?.[0]).toBe(reasonCode("edge"));
  expect(mean.reasons?.[2 * 14]).toBe(reasonCode("edge"));
  expect(mean.reasons?.[2 * 15]).toBe(0);
  expect(mean.reasons?.[2 * 364]).toBe(reasonCode("edge"));
  // A window that misses a value is missing, and says so: day 14 of the second cell is a gap (14 · 7 mod 19 = 3)
  expect(mean.reasons?.[2 * 20 + 1]).toBe(reasonCode("missing"));
  const whole = runOn(climatology, cube, { mean: "running-mean", days: 31 });
  expect(numbers(variable(whole, "mean"))).toEqual(numbers(mean));
  expect(out.notes.join()).toContain("over 31 steps");
  expect(out.notes.join()).toContain("30 steps");
});

test("a period's mean is over its steps alone", () => {
  const cube = year();
  const out = runOn(climatology, cube, {}, { kind: "none" }, [], [10, 20]);
  const want =
    Array.from({ length: 10 }, (_, i) => cube.values[2 * (10 + i)] as number).reduce((a, b) => a + b, 0) / 10;
  expectClose(variable(out, "mean").data[0], want, LIMIT);
});

test("what cannot be averaged is refused in words, or masked with its reason", () => {
  const cube = year();
  const record: Cube = { ...cube, steps: { ...cube.steps, kind: "record", name: "month" } };
  expect(() => runOn(climatology, record, { mean: "annual-cycle" })).toThrow("needs times");
  expect(() => runOn(climatology, record, { mean: "running-mean" })).toThrow("needs times");
  expect(() =>
    runOn(
      climatology,
      { ...cube, values: cube.values.slice(0, 16), steps: { ...cube.steps, values: cube.steps.values.slice(0, 8) } },
      { mean: "annual-cycle" },
    ),
  ).toThrow("needs 9 different days");
  const gap = { ...cube, steps: { ...cube.steps, values: cube.steps.values.map((d, i) => (i > 100 ? d + 1 : d)) } };
  expect(() => runOn(climatology, gap, { mean: "running-mean" })).toThrow("from step 101 to 102 there are 2.000 days");
  expect(() => runOn(climatology, cube, { mean: "running-mean", days: 2 })).toThrow("fewer than three steps");
  expect(() => runOn(climatology, cube, { mean: "running-mean", days: 800 })).toThrow("longer than the record");
  const empty = { ...cube, values: cube.values.map((x, i) => (i % 2 === 1 && i > 8 ? Number.NaN : x)) };
  const few = variable(runOn(climatology, empty, { mean: "annual-cycle", harmonics: 4 }), "mean");
  expect(few.reasons?.[1]).toBe(reasonCode("short"));
  expect(few.reasons?.[0]).toBe(0);
  const none = variable(
    runOn(climatology, { ...cube, values: cube.values.map((x, i) => (i % 2 === 1 ? Number.NaN : x)) }),
    "mean",
  );
  expect(none.data[1]).toBeNaN();
  expect(none.reasons?.[1]).toBe(reasonCode("missing"));
});
