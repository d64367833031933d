import { describe, expect, test } from "vitest";
import { zonalWaves } from "../../../../core/diagnostics/zonal-waves.ts";
import { reasonCode } from "../../../../core/field/reasons.ts";
import { type Cube, dailySteps, numbers, runOn, variable } from "../run-diagnostic.ts";
import { RAD } from "../wave-cubes.ts";

describe("speeds", () => {
  const lon = Float64Array.from({ length: 36 }, (_, i) => 10 * i);
  const moving = (k: number, perDay: number, days: Float64Array): Cube => ({
    values: Float64Array.from({ length: days.length * 36 }, (_, i) =>
      Math.cos(k * ((lon[i % 36] as number) - perDay * (days[Math.floor(i / 36)] as number)) * RAD),
    ),
    lat: Float64Array.of(60),
    lon,
    steps: { ...dailySteps(0), values: days },
    levels: null,
  });

  test("of a wave that moves evenly, east and west, also over uneven steps", () => {
    const uneven = Float64Array.of(0, 1, 2, 4, 4.5, 7, 8, 9);
    for (const perDay of [7, -11]) {
      const out = runOn(zonalWaves, moving(3, perDay, uneven), { waves: [3, 3] });
      expect(Math.abs((variable(out, "phase_speed").data[0] as number) - perDay)).toBeLessThan(1e-10);
      expect(variable(out, "phase_speed").dims).toEqual(["latitude", "wavenumber"]);
      expect(variable(out, "lag_one_speed").data[0]).toBeNaN();
      expect(out.notes.join()).toContain("not evenly spaced");
      const even = runOn(
        zonalWaves,
        moving(
          3,
          perDay,
          Float64Array.from({ length: 12 }, (_, i) => i / 2),
        ),
        { waves: [3, 3] },
      );
      expect(Math.abs((variable(even, "lag_one_speed").data[0] as number) - perDay)).toBeLessThan(1e-10);
      expect(variable(even, "phase_speed_error").data[0] as number).toBeLessThan(1e-6);
    }
  });

  test("a step of over 0.8 · 180°/k is ambiguous, and the number stands", () => {
    const days = Float64Array.from({ length: 6 }, (_, i) => i);
    const slow = variable(runOn(zonalWaves, moving(3, 47, days), { waves: [3, 3] }), "phase_speed"); // 0.78 of 60°
    const fast = variable(runOn(zonalWaves, moving(3, 49, days), { waves: [3, 3] }), "phase_speed"); // 0.82 of 60°
    expect(slow.reasons).toBeUndefined();
    expect(fast.reasons?.[0]).toBe(reasonCode("ambiguous"));
    expect(Math.abs((fast.data[0] as number) - 49)).toBeLessThan(1e-9);
  });

  test("a record that is no time has no speeds, and says so", () => {
    const cube = {
      ...moving(2, 5, Float64Array.of(1, 7)),
      steps: { kind: "record", name: "month", values: Float64Array.of(1, 7), calendar: "standard" } as const,
    };
    const out = runOn(zonalWaves, cube, { waves: [2, 2], drift_days: 5 });
    expect(variable(out, "phase_speed").data[0]).toBeNaN();
    expect(variable(out, "phase_speed").reasons?.[0]).toBe(reasonCode("no_time"));
    expect(variable(out, "drift").reasons?.[0]).toBe(reasonCode("no_time"));
    expect(variable(out, "stationarity_ratio").data[0]).toBeGreaterThan(0);
    expect(out.notes.join()).toContain('"month"');
  });

  test("two steps have a speed, and no scatter to tell its error from", () => {
    const out = runOn(zonalWaves, moving(2, 5, Float64Array.of(0, 1)), { waves: [2, 2], drift_days: 3 });
    expect(Math.abs((variable(out, "phase_speed").data[0] as number) - 5)).toBeLessThan(1e-10);
    expect(variable(out, "phase_speed").reasons).toBeUndefined();
    for (const name of ["phase_speed_error", "drift_error"]) {
      const error = variable(out, name);
      expect(error.data.at(-1), name).toBeNaN();
      expect(error.reasons?.at(-1), name).toBe(reasonCode("short"));
    }
  });

  test("a row of one value has no ridge, share or speed, and says why", () => {
    const still = { ...moving(2, 5, Float64Array.of(0, 1, 2)), values: new Float64Array(3 * 36).fill(5500) };
    const out = runOn(zonalWaves, still, { waves: [1, 2] });
    expect(numbers(variable(out, "amplitude"))).toEqual(new Array(6).fill(0));
    expect(variable(out, "amplitude").reasons).toBeUndefined();
    for (const name of [
      "ridge_longitude",
      "phase",
      "variance_share",
      "phase_speed",
      "lag_one_speed",
      "stationarity_ratio",
    ]) {
      const one = variable(out, name);
      expect(numbers(one).every(Number.isNaN), name).toBe(true);
      expect([...(one.reasons ?? [])], name).toEqual(new Array(one.data.length).fill(reasonCode("small")));
    }
    const band = runOn(zonalWaves, still, { waves: [1, 2], band: [60, 60], average: "incoherent" });
    expect([...(variable(band, "variance_share").reasons ?? [])]).toEqual(new Array(6).fill(reasonCode("small")));
  });

  test("one step alone is too short; weak steps are dropped under the floor", () => {
    expect(
      variable(runOn(zonalWaves, moving(2, 5, Float64Array.of(3)), { waves: [2, 2] }), "phase_speed").reasons?.[0],
    ).toBe(reasonCode("short"));
    const cube = moving(
      2,
      5,
      Float64Array.from({ length: 10 }, (_, i) => i),
    );
    // Day 4: the wave is nearly gone and its phase is nonsense
    for (let i = 0; i < 36; i++) cube.values[4 * 36 + i] = 0.01 * Math.cos(2 * ((lon[i] as number) - 100) * RAD);
    expect(
      Math.abs((variable(runOn(zonalWaves, cube, { waves: [2, 2] }), "phase_speed").data[0] as number) - 5),
    ).toBeLessThan(1e-9);
    expect(
      Math.abs(
        (variable(runOn(zonalWaves, cube, { waves: [2, 2], amplitude_floor: 0 }), "phase_speed").data[0] as number) - 5,
      ),
    ).toBeGreaterThan(1e-6);
  });

  test("a wave with under half a per cent of the variance has no drift", () => {
    const cube = moving(
      2,
      5,
      Float64Array.from({ length: 10 }, (_, i) => i),
    );
    const drift = variable(runOn(zonalWaves, cube, { waves: [2, 3], drift_days: 4 }), "drift");
    expect(drift.reasons?.[2 * 9 + 1]).toBe(reasonCode("small"));
    expect(drift.reasons?.[2 * 9]).toBe(0);
  });
});
