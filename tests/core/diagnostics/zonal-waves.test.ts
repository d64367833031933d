import { readFileSync } from "node:fs";
import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { zonalWaves } from "../../../core/diagnostics/zonal-waves.ts";
import { reasonCode } from "../../../core/field/reasons.ts";
import { type Cube, dailySteps, numbers, runOn, variable } from "./run-diagnostic.ts";

// By numpy from the definitions: reference/make_reference.py
const reference = JSON.parse(readFileSync(new URL("./reference/waves.json", import.meta.url), "utf8"));

const RAD = Math.PI / 180;
/** A sum of N products of heights of 5500, each rounded to 2⁻⁵³: the error of a coefficient, twice over for A = 2|c|, and once for each side. */
const HEIGHT_ROUNDING = 8 * 48 * 5600 * 2 ** -53;

/** The reference script's record. */
function referenceCube(): Cube {
  const [nTime, nLat, nLon] = [40, 9, 48];
  const lat = Float64Array.from({ length: nLat }, (_, j) => 40 + 2.5 * j);
  const lon = Float64Array.from({ length: nLon }, (_, i) => -180 + 7.5 * i);
  const values = new Float64Array(nTime * nLat * nLon);
  let at = 0;
  for (let t = 0; t < nTime; t++)
    for (let j = 0; j < nLat; j++)
      for (let i = 0; i < nLon; i++) {
        const l = (lon[i] as number) * RAD;
        const smooth =
          5500 -
          20 * j +
          90 * Math.cos(2 * (l - (30 + 4 * t) * RAD)) +
          (60 + 2 * j) * Math.cos(3 * (l - (10 - 2.5 * t + j) * RAD)) +
          40 * Math.cos(l - 1);
        values[at++] = smooth + (((t * 13 + j * 7 + i * 29) % 23) - 11) + (((t * t * 3 + i * i * 5 + j) % 17) - 8);
      }
  return { values, lat, lon, steps: dailySteps(nTime), levels: Float64Array.of(500) };
}

/** One row of one step. */
function rowCube(x: (lon: number) => number, lon: Float64Array): Cube {
  return { values: lon.map(x), lat: Float64Array.of(55), lon, steps: dailySteps(1), levels: Float64Array.of(500) };
}

function expectAll(
  got: ArrayLike<number>,
  want: readonly number[],
  limit: number | ((i: number) => number),
  words: string,
): void {
  expect(got.length, words).toBe(want.length);
  for (let i = 0; i < want.length; i++) {
    const bound = typeof limit === "number" ? limit : limit(i);
    const off = Math.abs((got[i] as number) - (want[i] as number));
    expect(off <= bound, `${words}, number ${i}: ${got[i]}, should be ${want[i]}, limit ${bound}`).toBe(true);
  }
}

describe("analytic waves", () => {
  // x = 5500 + 120 cos 2(λ − 30°): amplitude 120, ridges at 30° and 210° (the definition itself)
  test.each([
    ["144 columns from 0°", Float64Array.from({ length: 144 }, (_, i) => 2.5 * i)],
    ["240 columns from 0°", Float64Array.from({ length: 240 }, (_, i) => 1.5 * i)],
    ["360 columns from 0.5°", Float64Array.from({ length: 360 }, (_, i) => 0.5 + i)],
    ["480 columns from −180°", Float64Array.from({ length: 480 }, (_, i) => -180 + 0.75 * i)],
    ["97 columns from 10°", Float64Array.from({ length: 97 }, (_, i) => 10 + (360 / 97) * i)],
  ])("are found on %s", (_words, lon) => {
    const out = runOn(
      zonalWaves,
      rowCube((l) => 5500 + 120 * Math.cos(2 * (l - 30) * RAD), lon),
      { waves: [1, 4] },
    );
    const amplitude = variable(out, "amplitude").data;
    // n products of 5620, each rounded: 2 n · 5620 · 2⁻⁵³ / n on average; n of them at the very worst
    const limit = 2 * 5620 * 2 ** -53 * 16 * Math.log2(lon.length);
    expectAll(amplitude, [0, 120, 0, 0], limit, "amplitude");
    expect(Math.abs((variable(out, "ridge_longitude").data[1] as number) - 30)).toBeLessThan(
      ((limit / 120) * 180) / Math.PI,
    );
    expect(Math.abs((variable(out, "variance_share").data[1] as number) - 1)).toBeLessThan(1e-12);
    expect(Math.abs((variable(out, "phase").data[1] as number) + 60)).toBeLessThan(1e-9);
  });

  test("the Nyquist wave is |c|, has no speed, and shares close to 1 with all others (Parseval)", () => {
    const lon = Float64Array.from({ length: 16 }, (_, i) => 22.5 * i);
    const cube: Cube = {
      ...rowCube(() => 0, lon),
      values: Float64Array.from({ length: 48 }, (_, i) => ((i * 37) % 11) + (i % 2 === 0 ? 3 : -3)),
      steps: dailySteps(3),
    };
    const out = runOn(zonalWaves, cube, { waves: [1, 8] });
    const share = variable(out, "variance_share");
    for (let t = 0; t < 3; t++)
      expect(
        Math.abs(
          numbers(share)
            .slice(8 * t, 8 * t + 8)
            .reduce((a, b) => a + b, 0) - 1,
        ),
      ).toBeLessThan(1e-13);
    const alternating = (t: number) =>
      cube.values.slice(16 * t, 16 * t + 16).reduce((sum, x, i) => sum + (i % 2 === 0 ? x : -x), 0) / 16;
    expect(Math.abs((variable(out, "amplitude").data[7] as number) - Math.abs(alternating(0)))).toBeLessThan(1e-12);
    expect(variable(out, "phase_speed").data[7]).toBeNaN();
  });
});

describe("against numpy", () => {
  const cube = referenceCube();
  const band = runOn(zonalWaves, cube, { band: [40, 60], waves: [1, 6], drift_days: 10 }, { kind: "record-mean" });

  test("amplitude, ridge and share of a band, coherent and incoherent", () => {
    const amplitudes = reference.band.amplitude.flat() as number[];
    expectAll(variable(band, "amplitude").data, amplitudes, HEIGHT_ROUNDING, "amplitude");
    expectAll(
      variable(band, "ridge_longitude").data,
      reference.band.ridge.flat(),
      (i) => HEIGHT_ROUNDING / (amplitudes[i] as number) / ((i % 6) + 1) / RAD,
      "ridge",
    );
    expectAll(variable(band, "variance_share").data, reference.band.share.flat(), 1e-12, "share");
    const incoherent = runOn(zonalWaves, cube, { band: [40, 60], waves: [1, 6], average: "incoherent" });
    expectAll(
      variable(incoherent, "amplitude").data,
      reference.incoherent.amplitude.flat(),
      HEIGHT_ROUNDING,
      "incoherent",
    );
    expect(incoherent.variables.map(({ name }) => name)).toEqual(["amplitude", "variance_share"]);
    expect(incoherent.notes.join()).toContain("incoherent");
  });

  test("rows of the whole grid, and a band of equal edges is the nearest row", () => {
    const rows = variable(runOn(zonalWaves, cube, { waves: [1, 6] }), "amplitude");
    expect(rows.dims).toEqual(["time", "level", "latitude", "wavenumber"]);
    expect(rows.shape).toEqual([40, 1, 9, 6]);
    const fourth = Array.from(
      { length: 40 * 6 },
      (_, i) => rows.data[(Math.floor(i / 6) * 9 + 4) * 6 + (i % 6)] as number,
    );
    expectAll(fourth, reference.row4.amplitude.flat(), HEIGHT_ROUNDING, "row");
    const one = variable(runOn(zonalWaves, cube, { band: [50.4, 50.4], waves: [1, 6] }), "amplitude");
    expect([...one.data]).toEqual(fourth);
  });

  test("phase speed and its error by weighted least squares, lag-one speed, stationarity", () => {
    const speeds = reference.band.speed as [number, number][];
    // Conditioning: a relative error 1e-12 of the ridges' positions (as above) over 40 days
    expectAll(
      variable(band, "phase_speed").data,
      speeds.map(([s]) => s),
      1e-9,
      "speed",
    );
    expectAll(
      variable(band, "phase_speed_error").data,
      speeds.map(([, e]) => e),
      1e-9,
      "error",
    );
    expectAll(variable(band, "lag_one_speed").data, reference.band.lag_one, 1e-9, "lag one");
    // A ratio of coefficients, of which the smallest is about half a metre
    expectAll(
      variable(band, "stationarity_ratio").data,
      reference.band.stationarity,
      2 * HEIGHT_ROUNDING,
      "stationarity",
    );
    // The waves were made to move so (the noise moves them by less than three standard errors)
    for (const [k, made] of [
      [2, 4],
      [3, -2.5],
    ] as const) {
      const [got, error] = speeds[k - 1] as [number, number];
      expect(Math.abs(got - made)).toBeLessThan(3 * error + 0.05);
    }
    const metres = ((variable(band, "phase_speed").data[1] as number) * RAD * 6_371_229 * Math.cos(50 * RAD)) / 86_400;
    expect(Math.abs((variable(band, "phase_speed_ms").data[1] as number) - metres)).toBeLessThan(1e-12);
  });

  test("drift over the last ten days", () => {
    const [drift, error] = [variable(band, "drift"), variable(band, "drift_error")];
    [10, 25, 39].forEach((t, i) => {
      [2, 3].forEach((k, j) => {
        const [speed, standard] = reference.band.drift[i][j] as [number, number];
        expect(Math.abs((drift.data[6 * t + k - 1] as number) - speed), `day ${t}, wave ${k}`).toBeLessThan(1e-9);
        expect(Math.abs((error.data[6 * t + k - 1] as number) - standard)).toBeLessThan(1e-9);
      });
    });
    expect(drift.reasons?.[0]).toBe(reasonCode("short"));
    expect(drift.data[0]).toBeNaN();
  });

  test("interference with the background's waves (Smith & Kushner 2012)", () => {
    expectAll(
      variable(band, "interference").data,
      reference.band.interference.flat(),
      2 * 100 * HEIGHT_ROUNDING,
      "covariance",
    );
    const ofAnomaly = runOn(zonalWaves, cube, { band: [40, 60], of: "anomaly" }, { kind: "record-mean" });
    expectAll(
      variable(ofAnomaly, "interference").data,
      reference.band.interference.flat(),
      2 * 100 * HEIGHT_ROUNDING,
      "covariance of the anomaly",
    );
    // In the variance of the sum it counts twice: A² /2 = A_clim²/2 + A_anom²/2 + 2 · covariance
    const full = variable(band, "amplitude").data;
    const anomaly = variable(ofAnomaly, "amplitude").data;
    const clim = variable(band, "background_amplitude").data;
    const covariance = variable(band, "interference").data;
    for (let i = 0; i < full.length; i++) {
      const sum = (clim[i] as number) ** 2 / 2 + (anomaly[i] as number) ** 2 / 2 + 2 * (covariance[i] as number);
      expect(Math.abs((full[i] as number) ** 2 / 2 - sum), `number ${i}`).toBeLessThan(200 * HEIGHT_ROUNDING * 2);
    }
    expect(variable(band, "interference").units).toBe("gpm2");
  });

  test("the numbers do not depend on where the record is cut", () => {
    const cut = runOn(
      zonalWaves,
      cube,
      { band: [40, 60], waves: [1, 6], drift_days: 10 },
      { kind: "record-mean" },
      [1, 7, 23],
    );
    for (const one of band.variables) expect([...variable(cut, one.name).data], one.name).toEqual([...one.data]);
  });
});

test("putting all waves together gives the field back, and chosen ones their sum", () => {
  const cube = referenceCube();
  const all = runOn(zonalWaves, cube, { reconstruct: Array.from({ length: 25 }, (_, k) => k) });
  expectAll(variable(all, "reconstruction").data, [...cube.values], HEIGHT_ROUNDING, "whole");
  const lon = Float64Array.from({ length: 24 }, (_, i) => 7 + 15 * i);
  const two = runOn(
    zonalWaves,
    rowCube((l) => 100 + 3 * Math.cos(l * RAD) + 5 * Math.cos(2 * (l - 20) * RAD) + 7 * Math.sin(5 * l * RAD), lon),
    { waves: [1, 2], reconstruct: [2, 5] },
  );
  expectAll(
    variable(two, "reconstruction").data,
    Array.from(lon, (l) => 5 * Math.cos(2 * (l - 20) * RAD) + 7 * Math.sin(5 * l * RAD)),
    1e-12,
    "waves 2 and 5",
  );
});

test("the shares at a point are A cos k(λ₀ − λ_k) and add up to the value there", () => {
  const cube = referenceCube();
  const out = runOn(zonalWaves, cube, { waves: [1, 6], point: [47, 31] });
  const share = variable(out, "share");
  expect(share.shape).toEqual([40, 1, 8]);
  const row = 3; // 47.5°N is nearer to 47° than 45°N
  const column = 28; // 30°E
  for (let t = 0; t < 40; t++) {
    const own = numbers(share).slice(8 * t, 8 * t + 8);
    expect(
      Math.abs(own.reduce((a, b) => a + b, 0) - (cube.values[(t * 9 + row) * 48 + column] as number)),
    ).toBeLessThan(HEIGHT_ROUNDING);
    const amplitude = variable(out, "amplitude").data[(t * 9 + row) * 6 + 1] as number;
    const ridge = variable(out, "ridge_longitude").data[(t * 9 + row) * 6 + 1] as number;
    expect(Math.abs((own[2] as number) - amplitude * Math.cos(2 * (30 - ridge) * RAD))).toBeLessThan(HEIGHT_ROUNDING);
  }
  const anomaly = variable(
    runOn(zonalWaves, cube, { waves: [1, 6], point: [47, 31], of: "anomaly" }, { kind: "record-mean" }),
    "share",
  );
  const mean =
    Array.from({ length: 40 }, (_, t) => cube.values[(t * 9 + row) * 48 + column] as number).reduce(
      (a, b) => a + b,
      0,
    ) / 40;
  expect(
    Math.abs(
      numbers(anomaly)
        .slice(0, 8)
        .reduce((a, b) => a + b, 0) -
        ((cube.values[row * 48 + column] as number) - mean),
    ),
  ).toBeLessThan(2 * HEIGHT_ROUNDING);
});

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

describe("guards", () => {
  const lon = Float64Array.from({ length: 36 }, (_, i) => 10 * i);
  const cube = rowCube((l) => Math.cos(l * RAD), lon);
  test("a missing value masks its own row and no other", () => {
    const values = new Float64Array(72).map((_, i) => Math.cos((lon[i % 36] as number) * RAD));
    values[5] = Number.NaN;
    const amplitude = variable(
      runOn(zonalWaves, { ...cube, values, lat: Float64Array.of(50, 60) }, { waves: [1, 1] }),
      "amplitude",
    );
    expect(amplitude.reasons).toEqual(Uint8Array.of(reasonCode("missing"), 0));
    expect(amplitude.data[0]).toBeNaN();
    expect(Math.abs((amplitude.data[1] as number) - 1)).toBeLessThan(1e-14);
  });
  test.each([
    [
      "a grid that does not close the circle",
      () =>
        runOn(
          zonalWaves,
          rowCube(() => 1, lon.slice(0, 30)),
        ),
      "do not close the circle",
    ],
    [
      "uneven columns",
      () =>
        runOn(
          zonalWaves,
          rowCube(
            () => 1,
            lon.map((l, i) => (i === 3 ? l + 1 : l)),
          ),
        ),
      "not evenly spaced",
    ],
    ["a band without a row", () => runOn(zonalWaves, cube, { band: [60, 70] }), "holds no row"],
    [
      "a latitude off the grid",
      () =>
        runOn(zonalWaves, { ...cube, lat: Float64Array.of(50, 52), values: new Float64Array(72) }, { band: [70, 70] }),
      "no row near",
    ],
    ["waves beyond the grid's", () => runOn(zonalWaves, cube, { waves: [20, 22] }), "carry waves 1 to 18"],
    ["anomalies without a background", () => runOn(zonalWaves, cube, { of: "anomaly" }), "needs a background"],
    ["a wave that cannot be put together", () => runOn(zonalWaves, cube, { reconstruct: [19] }), "wave 19 is beyond"],
    [
      "an incoherent reconstruction",
      () => runOn(zonalWaves, cube, { band: [50, 60], average: "incoherent", reconstruct: [1] }),
      "no phase",
    ],
    ["a point that is none", () => runOn(zonalWaves, cube, { point: [95, 0] }), "not a latitude"],
  ])("%s is refused", (_words, run, words) => {
    expect(run).toThrow(words);
  });
  test("waves are cut off where the grid ends", () => {
    expect(variable(runOn(zonalWaves, cube, { waves: [17, 40] }), "amplitude").shape).toEqual([1, 1, 1, 2]);
  });
});

test("turning the record east turns every ridge and changes nothing else; scaling scales", () => {
  const base = referenceCube();
  const short: Cube = { ...base, values: base.values.slice(0, 3 * 9 * 48), steps: dailySteps(3) };
  const before = runOn(zonalWaves, short, { band: [40, 60], waves: [1, 6] });
  fc.assert(
    fc.property(fc.integer({ min: 0, max: 47 }), fc.double({ min: 0.01, max: 100, noNaN: true }), (shift, factor) => {
      const values = short.values.map(
        (_, i) => factor * (short.values[Math.floor(i / 48) * 48 + (((i % 48) - shift + 48) % 48)] as number),
      );
      const after = runOn(zonalWaves, { ...short, values }, { band: [40, 60], waves: [1, 6] });
      variable(before, "amplitude").data.forEach((a, i) => {
        expect(Math.abs((variable(after, "amplitude").data[i] as number) - factor * a)).toBeLessThan(
          2 * factor * HEIGHT_ROUNDING,
        );
        const k = (i % 6) + 1;
        const turn =
          (variable(after, "ridge_longitude").data[i] as number) -
          (variable(before, "ridge_longitude").data[i] as number) -
          7.5 * shift;
        const off = Math.abs(turn - (360 / k) * Math.round((turn * k) / 360));
        expect(off).toBeLessThan((2 * HEIGHT_ROUNDING) / a / k / RAD);
      });
    }),
    { numRuns: 40, seed: 1 },
  );
});
