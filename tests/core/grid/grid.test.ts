import { readFileSync } from "node:fs";
import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { closesCircle, isEven, requireCircle } from "../../../core/grid/circle.ts";
import { gaussianLatitudes } from "../../../core/grid/gaussian-rows.ts";
import { nearestColumn, nearestRow, rowsOfBand, rowWeights } from "../../../core/grid/rows.ts";

const even = (from: number, step: number, n: number) => Float64Array.from({ length: n }, (_, i) => from + i * step);

describe("row weights", () => {
  test.each([2.5, 1.5, 0.75, 1])(
    "%d° from pole to pole: the whole sphere, 2, and the caps as the definition has them",
    (step) => {
      const lat = even(-90, step, Math.round(180 / step) + 1);
      const weights = rowWeights(lat);
      // n sums of sines, each rounded: n · 2⁻⁵³
      expect(Math.abs(weights.reduce((a, b) => a + b, 0) - 2)).toBeLessThanOrEqual(lat.length * 2 ** -52);
      const rad = Math.PI / 180;
      expect(weights[0]).toBeCloseTo(1 - Math.sin((90 - step / 2) * rad), 15);
      const middle = (lat.length - 1) / 2;
      expect(weights[middle]).toBeCloseTo(2 * Math.sin((step / 2) * rad), 15);
    },
  );

  test("Gaussian rows (numpy's leggauss) share the sphere, and weigh less the nearer the pole", () => {
    const held = JSON.parse(readFileSync(new URL("reference/gauss.json", import.meta.url), "utf8")) as Record<
      string,
      { latitudes: number[] }
    >;
    for (const [rows, { latitudes }] of Object.entries(held)) {
      const own = rowWeights(Float64Array.from(latitudes));
      expect(Math.abs(own.reduce((a, b) => a + b, 0) - 2)).toBeLessThanOrEqual(Number(rows) * 2 ** -52);
      for (let i = 1; 2 * i < own.length; i++) expect(own[i]).toBeGreaterThan(own[i - 1] as number);
    }
  });

  test("a regional grid's end rows weigh like their neighbours; one row weighs 1", () => {
    const weights = rowWeights(even(30, 5, 5));
    const rad = Math.PI / 180;
    expect(weights[0]).toBeCloseTo(Math.sin(32.5 * rad) - Math.sin(27.5 * rad), 15);
    expect([...rowWeights(Float64Array.of(50))]).toEqual([1]);
  });
});

describe("row weights of other grids", () => {
  test("any rows that reach within a spacing of both poles share the whole sphere, each its positive part", () => {
    const anyRows = fc
      .uniqueArray(fc.integer({ min: -179, max: 179 }), { minLength: 1, maxLength: 60 })
      .map((halves) => [-90, ...halves.map((half) => half / 2).sort((a, b) => a - b), 90]);
    fc.assert(
      fc.property(anyRows, (lat) => {
        const weights = rowWeights(Float64Array.from(lat));
        expect(Math.abs(weights.reduce((a, b) => a + b, 0) - 2)).toBeLessThanOrEqual(lat.length * 2 ** -52);
        for (const weight of weights) expect(weight).toBeGreaterThan(0);
      }),
    );
  });

  test("rows half a spacing from the poles reach them; rows one spacing from them do not, however they are stored", () => {
    const rad = Math.PI / 180;
    expect(rowWeights(even(-89.5, 1, 180))[0]).toBeCloseTo(1 - Math.sin(89 * rad), 15);
    for (const step of [1, 1.2, 0.6, 2.5]) {
      const n = 2 * Math.round(90 / step - 1) + 1;
      const lat = Array.from({ length: n }, (_, i) => (i - (n - 1) / 2) * step);
      const own = rowWeights(Float64Array.from(lat));
      const single = rowWeights(Float64Array.from(lat, Math.fround));
      expect(own[n - 1]).toBeCloseTo(Math.sin((90 - step / 2) * rad) - Math.sin((90 - 1.5 * step) * rad), 14);
      // float32 moves a latitude under 128° by 2⁻¹⁸° at most, and an edge, which is half a spacing beyond, by twice that;
      // the sine changes by less than that in radians.
      for (let i = 0; i < n; i++)
        expect(Math.abs((single[i] as number) - (own[i] as number))).toBeLessThanOrEqual(4 * 2 ** -18 * rad);
    }
  });
});

describe("nearest", () => {
  test("rows: of two equally near, the one nearer the equator", () => {
    const lat = even(-90, 2.5, 73);
    expect(lat[nearestRow(lat, 61.25)]).toBe(60);
    expect(lat[nearestRow(lat, -61.25)]).toBe(-60);
    expect(lat[nearestRow(lat, 61.26)]).toBe(62.5);
    // Also where float32 has moved the rows: 0.7 and 1.4 are 0.69999999 and 1.39999998 there
    const stored = Float64Array.from(even(-90, 0.7, 258), Math.fround);
    for (let i = 129; i < 257; i++) {
      const between = ((stored[i] as number) + (stored[i + 1] as number)) / 2 + 1e-6;
      const expected = Math.abs(stored[i] as number) <= Math.abs(stored[i + 1] as number) ? i : i + 1;
      expect(nearestRow(stored, between)).toBe(expected);
    }
    // The two rows beside the equator are equally near to both it and the equator: the southern stands first.
    expect(nearestRow(Float64Array.of(-1.25, 1.25), 0)).toBe(0);
    expect(nearestRow(Float64Array.of(50), -80)).toBe(0);
    expect(lat[nearestRow(lat, 1000)]).toBe(90);
  });

  test("columns go round the circle; of two equally near, the western", () => {
    const lon = even(0, 2.5, 144);
    expect(lon[nearestColumn(lon, -1)]).toBe(0);
    expect(lon[nearestColumn(lon, -1.25)]).toBe(357.5);
    expect(lon[nearestColumn(lon, 358.75)]).toBe(357.5);
    expect(lon[nearestColumn(lon, 721)]).toBe(0);
    const west = even(-180, 2.5, 144);
    expect(west[nearestColumn(west, 180)]).toBe(-180);
    expect(west[nearestColumn(west, 178.75)]).toBe(177.5);
  });

  test("no other column is nearer", () => {
    const lon = even(-180, 1.5, 240);
    fc.assert(
      fc.property(fc.double({ min: -720, max: 720, noNaN: true }), (longitude) => {
        const away = (column: number) =>
          Math.abs((((((lon[column] as number) - longitude + 540) % 360) + 360) % 360) - 180);
        const found = away(nearestColumn(lon, longitude));
        for (let i = 0; i < 240; i++) expect(found).toBeLessThanOrEqual(away(i) + 1e-4);
      }),
    );
  });
});

describe("bands", () => {
  const lat = Float64Array.from(even(-90, 2.5, 73), Math.fround);
  test("both ends are included; equal ends are the nearest row", () => {
    expect(rowsOfBand(lat, [50, 60])).toEqual([56, 61]);
    expect(rowsOfBand(lat, [61, 61])).toEqual([60, 61]);
    expect(rowsOfBand(lat, [-90, 90])).toEqual([0, 73]);
  });

  test("a band without a row, or a latitude off the grid, is refused with what there is", () => {
    expect(() => rowsOfBand(lat, [50.5, 51])).toThrow(
      "The band 50.5° to 51°N holds no row. The grid's rows run from -90.00° to 90.00°N.",
    );
    expect(() => rowsOfBand(even(30, 2.5, 10), [10, 10])).toThrow("There is no row near 10°N");
    expect(() => rowsOfBand(even(30, 2.5, 10), [10, 10])).toThrow(expect.objectContaining({ name: "GridError" }));
    expect(() => rowsOfBand(lat, [60, 50])).toThrow("The band 60° to 50°N holds no row");
    expect(() => rowsOfBand(lat, [Number.NaN, 50])).toThrow("holds no row");
    expect(() => rowsOfBand(lat, [50, Number.NaN])).toThrow("holds no row");
    // A row's spacing beyond the last is still that row.
    expect(rowsOfBand(even(30, 2.5, 10), [28, 28])).toEqual([0, 1]);
    expect(rowsOfBand(Float64Array.of(50), [50, 60])).toEqual([0, 1]);
  });
});

describe("circles", () => {
  test("even ones close, whatever their start and however stored", () => {
    for (const [from, step, n] of [
      [0, 2.5, 144],
      [-180, 1.5, 240],
      [0, 360 / 256, 256],
      [0.25, 0.25, 1440],
    ] as const) {
      expect(closesCircle(even(from, step, n))).toBe(true);
      expect(closesCircle(Float64Array.from(even(from, step, n), Math.fround))).toBe(true);
    }
  });

  test("a missing column, a repeated one, uneven ones, a region do not, and the reason is told", () => {
    const grid = (lon: Float64Array) => ({ lat: even(-90, 10, 19), lon, closesCircle: closesCircle(lon) });
    for (const lon of [even(0, 2.5, 143), even(0, 2.5, 145), even(-30, 1, 60), even(0, 0.25, 1439)]) {
      expect(closesCircle(lon)).toBe(false);
      expect(() => requireCircle(grid(lon), "Zonal waves")).toThrow(
        /Zonal waves need a full circle.*do not close the circle.*Use a file/s,
      );
    }
    const uneven = even(0, 90, 4);
    uneven[2] = 185;
    expect(isEven(uneven)).toBe(false);
    expect(() => requireCircle(grid(uneven), "Zonal waves")).toThrow("are not evenly spaced");
    expect(() => requireCircle(grid(uneven), "Zonal waves")).toThrow(expect.objectContaining({ name: "GridError" }));
    expect(() => requireCircle(grid(even(-30, 1, 60)), "Waves")).toThrow("its 60 columns run from -30.00° to 29.00°E");
  });
});

test("fewer than three columns are no circle, and say nothing of their spacing", () => {
  for (const lon of [[], [0], [0, 180]]) {
    expect(closesCircle(Float64Array.from(lon))).toBe(false);
    expect(isEven(Float64Array.from(lon))).toBe(true);
  }
  expect(closesCircle(Float64Array.of(0, 120, 240))).toBe(true);
  expect(() => requireCircle({ lat: Float64Array.of(0), lon: even(0, 120, 3), closesCircle: true }, "")).not.toThrow();
  // The finest grid in use, 0.025°, with one column missing: every step could be within its tolerance.
  const fine = even(0, 360 / 14_399, 14_399);
  expect(closesCircle(fine)).toBe(true);
  expect(closesCircle(even(0, 0.025, 14_399))).toBe(false);
});

test("the smallest Gaussian grids are those of Abramowitz & Stegun 1964, table 25.4", () => {
  for (const [parallels, zeros] of [
    [1, [0.577_350_269_189_626]],
    [2, [0.339_981_043_584_856, 0.861_136_311_594_053]],
    [4, [0.183_434_642_495_65, 0.525_532_409_916_329, 0.796_666_477_413_627, 0.960_289_856_497_536]],
  ] as const) {
    const sines = [...gaussianLatitudes(parallels)].map((lat) => Math.sin((lat * Math.PI) / 180));
    // Fifteen places are printed.
    const want = [...zeros.toReversed().map((x) => -x), ...zeros];
    sines.forEach((x, i) => {
      expect(Math.abs(x - (want[i] as number))).toBeLessThanOrEqual(1e-15);
    });
  }
});

test("Gaussian latitudes are numpy's", () => {
  const held = JSON.parse(readFileSync(new URL("reference/gauss.json", import.meta.url), "utf8")) as Record<
    string,
    { latitudes: number[] }
  >;
  for (const [rows, { latitudes }] of Object.entries(held)) {
    if (Number(rows) % 2 === 1) continue;
    const own = gaussianLatitudes(Number(rows) / 2);
    // An error of 2⁻⁵³ in sin φ is 2⁻⁵³/cos φ in φ; the last row stands 1.6/rows rad from the pole. Both sides, some roundings.
    const limit = ((8 * 2 ** -53 * Number(rows)) / 1.6) * (180 / Math.PI);
    latitudes.forEach((latitude, i) => {
      expect(Math.abs((own[i] as number) - latitude), `${rows} rows, row ${i}`).toBeLessThanOrEqual(limit);
    });
  }
  for (const bad of [0, 1.5, -3, 5000, Number.NaN]) expect(() => gaussianLatitudes(bad)).toThrow("is none");
});
