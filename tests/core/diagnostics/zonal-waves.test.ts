import { readFileSync } from "node:fs";
import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { zonalWaves } from "../../../core/diagnostics/zonal-waves.ts";
import { reasonCode } from "../../../core/field/reasons.ts";
import { orderedColumns } from "../../../core/formats/cf/horizontal.ts";
import { type Cube, dailySteps, numbers, runOn, variable } from "./run-diagnostic.ts";
import { expectAll, HEIGHT_ROUNDING, RAD, referenceCube, rowCube } from "./wave-cubes.ts";

// By numpy and scipy from the definitions: reference/make_reference.py
const reference = JSON.parse(readFileSync(new URL("./reference/waves.json", import.meta.url), "utf8"));

describe("analytic waves", () => {
  // x = 5500 + 120 cos 2(λ − 30°): amplitude 120, ridges at 30° and 210° (the definition itself)
  test.each([
    ["144 columns from 0°", Float64Array.from({ length: 144 }, (_, i) => 2.5 * i)],
    ["240 columns from 0°", Float64Array.from({ length: 240 }, (_, i) => 1.5 * i)],
    ["360 columns from 0.5°", Float64Array.from({ length: 360 }, (_, i) => 0.5 + i)],
    ["240 columns from −180°", Float64Array.from({ length: 240 }, (_, i) => -180 + 1.5 * i)],
    [
      "361 columns with the repeated meridian, as the grid keeps them",
      orderedColumns(
        Float64Array.from({ length: 361 }, (_, i) => i),
        "z",
      ).values,
    ],
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

  test("random rows, all waves, by scipy.fft", () => {
    const { rows, first, amplitude, ridge, share } = reference.random;
    const nLon = rows[0].length as number;
    const out = runOn(
      zonalWaves,
      {
        values: Float64Array.from(rows.flat() as number[]),
        lat: Float64Array.from(rows, (_: unknown, j: number) => 10 * j),
        lon: Float64Array.from({ length: nLon }, (_, i) => first + (360 / nLon) * i),
        steps: dailySteps(1),
        levels: null,
      },
      { waves: [1, nLon / 2] },
    );
    // Values under 5 in size: a sum of 60 products rounded in either library, A = 2|c|
    const limit = 8 * 60 * 5 * 2 ** -53;
    const amplitudes = amplitude.flat() as number[];
    expectAll(variable(out, "amplitude").data, amplitudes, limit, "amplitude");
    expectAll(variable(out, "variance_share").data, share.flat(), 2 * limit, "share");
    const ridges = (ridge.flat() as number[]).map((r, i) => ((i % 30) + 1 === 30 ? Number.NaN : r));
    const got = numbers(variable(out, "ridge_longitude"));
    ridges.forEach((want, i) => {
      if (Number.isNaN(want)) return; // the Nyquist wave: its sign alone is known
      const k = (i % 30) + 1;
      const bound = limit / (amplitudes[i] as number) / k / RAD + 360 * 2 ** -52;
      const turn = (got[i] as number) - want;
      const off = Math.abs(turn - (360 / k) * Math.round((turn * k) / 360));
      expect(off <= bound, `ridge ${i}: ${got[i]}, should be ${want}, limit ${bound}`).toBe(true);
    });
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
