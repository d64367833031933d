import { existsSync, readFileSync } from "node:fs";
import { describe, expect, test } from "vitest";
import { LIBRARIES } from "../../../app/codecs/libraries.ts";
import type { Outcome } from "../../../core/diagnostics/entry.ts";
import { localWaveActivity } from "../../../core/diagnostics/local-wave-activity.ts";
import { reasonCode } from "../../../core/field/reasons.ts";
import { memorySource } from "../../../core/formats/memory-source.ts";
import { openFile } from "../../../core/formats/open-file.ts";
import { dataFile } from "../formats/data-folder.ts";
import { sampleCube } from "./blocks/block-cubes.ts";
import { type Cube, dailySteps, numbers, runOn, variable } from "./run-diagnostic.ts";

// By numpy with a full sort and plain loops: reference/make_lwa.py
const reference = JSON.parse(readFileSync(new URL("./reference/lwa.json", import.meta.url), "utf8"));
const PARTS = [
  ["anticyclonic_activity", "ridge"],
  ["cyclonic_activity", "trough"],
] as const;

/**
 * A sum of n rows of heights under 6000 less their like, times weights that sum to 1: each height and each weight is good to
 * 2⁻⁵³ of itself, each sum of n to n · 2⁻⁵³; twice for both sides; times a/cos φ.
 */
function limit(n: number, lat: number): number {
  return ((2 * n * 6000 * 2 ** -53) / Math.cos((lat * Math.PI) / 180)) * 6_371_229;
}

function cubeOf(
  lat: readonly number[],
  nLon: number,
  z: (lat: number, lon: number, j: number, i: number) => number,
): Cube {
  const lon = Float64Array.from({ length: nLon }, (_, i) => (360 / nLon) * i);
  const values = Float64Array.from({ length: lat.length * nLon }, (_, at) => {
    const j = Math.floor(at / nLon);
    return z(lat[j], lon[at % nLon], j, at % nLon);
  });
  return { values, lat: Float64Array.from(lat), lon, steps: dailySteps(1), levels: null };
}

function latitudes(out: Outcome): number[] {
  return Array.from(out.coordinates.find(({ name }) => name === "latitude")?.values ?? []);
}

const evenRows = (spacing: number): number[] => Array.from({ length: 180 / spacing + 1 }, (_, j) => -90 + spacing * j);

const UNEVEN = [
  -88, -81, -75, -66, -60, -51, -45, -36, -30, -21, -15, -6, 4, 9, 20, 25, 33, 44, 50, 58, 69, 71, 80, 87,
];
const uneven = cubeOf(
  UNEVEN,
  32,
  (lat, _, j, i) => Math.floor(5850 - 9 * Math.abs(lat)) + ((j * j * 37 + i * i * 101 + i * j * 13) % 2003) / 8,
);

test("numpy's parts on three steps of the sample case, both hemispheres", async () => {
  const cube = await sampleCube();
  const out = runOn(localWaveActivity, cube, { hemisphere: "both" }, { kind: "none" }, [17]);
  const steps = [0, 30, 59];
  for (const [name, key] of PARTS) {
    const { data, shape } = variable(out, name);
    expect(shape).toEqual([60, 1, 73, 144]);
    steps.forEach((t, s) => {
      for (const side of ["north", "south"]) {
        const want = reference.sample[s][side];
        want.rows.forEach((row: number, r: number) => {
          want[key][r].forEach((value: number, i: number) => {
            const got = data[(t * 73 + row) * 144 + 6 * i];
            const bound = limit(37, cube.lat[row]) + (data instanceof Float32Array ? value * 2 ** -24 : 0);
            const words = `${name} step ${t} row ${row} column ${6 * i}: ${got}, should be ${value}, limit ${bound}`;
            expect(Math.abs(got - value) <= bound, words).toBe(true);
          });
        });
      }
    });
  }
});

test.each(["north", "south"])("numpy's parts on uneven rows without equator and pole: %s", (hemisphere) => {
  const out = runOn(localWaveActivity, uneven, { hemisphere });
  const want = reference.invented[hemisphere];
  const rows: number[] = [...want.rows].sort((a, b) => a - b);
  expect(latitudes(out)).toEqual(rows.map((row) => UNEVEN[row]));
  for (const [name, key] of PARTS) {
    const { data } = variable(out, name);
    want.rows.forEach((row: number, r: number) => {
      want[key][r].forEach((value: number, i: number) => {
        const got = data[rows.indexOf(row) * 32 + i];
        expect(Math.abs(got - value) <= limit(12, UNEVEN[row]), `${name} ${row} ${i}: ${got}, ${value}`).toBe(true);
      });
    });
  }
  const [total, ridge, trough] = out.variables.map(numbers);
  expect(total).toEqual(ridge.map((a, i) => a + trough[i]));
});

const JANUARY = dataFile("eraint_uvz.nc");
test.skipIf(!existsSync(JANUARY))(
  `numpy's parts in January of ERA-Interim (${JANUARY}, skipped where absent)`,
  async () => {
    const file = await openFile(memorySource("eraint_uvz.nc", new Uint8Array(readFileSync(JANUARY))), LIBRARIES);
    const field = file.contents.fields.find(({ quantity }) => quantity === "geopotential_height");
    if (field === undefined) throw new Error("no heights");
    const { lat, lon } = field.grid;
    const levels = [field.levels?.indexOf(500) ?? -1];
    const { data } = await file.read(field.key, { times: [0, 1], rows: [0, lat.length], levels });
    const steps = { ...field.steps, values: field.steps.values.slice(0, 1) };
    const out = runOn(localWaveActivity, { values: data, lat, lon, steps, levels: null }, { hemisphere: "both" });
    const column = (wanted: number): number => lon.findIndex((l) => Math.abs(((l - wanted + 540) % 360) - 180) < 1e-6);
    for (const side of ["north", "south"])
      for (const [name, key] of PARTS) {
        const got = variable(out, name).data;
        const want = reference.january[side];
        want.lat.forEach((latitude: number, r: number) => {
          reference.january.lon.forEach((longitude: number, i: number) => {
            const at = lat.indexOf(latitude) * lon.length + column(longitude);
            const words = `${name} ${latitude} ${longitude}: ${got[at]}, should be ${want[key][r][i]}`;
            // Heights from packed geopotential: two roundings more on each
            expect(Math.abs(got[at] - want[key][r][i]) <= 3 * limit(121, latitude), words).toBe(true);
          });
        });
      }
  },
);

describe("what the definition says", () => {
  test("zonally symmetric heights that fall poleward have none at all", () => {
    for (const spacing of [2.5, 10]) {
      const cube = cubeOf(evenRows(spacing), 36, (lat) => 5850 - 900 * Math.sin((lat * Math.PI) / 180) ** 2);
      const out = runOn(localWaveActivity, cube, { hemisphere: "both" });
      for (const value of variable(out, "activity").data) expect(Number.isNaN(value) || value === 0).toBe(true);
    }
  });
  test("zonally symmetric heights that rise somewhere have some", () => {
    const cube = cubeOf(evenRows(5), 36, (lat) => 5850 - 10 * Math.abs(lat) + (Math.abs(lat) === 50 ? 200 : 0));
    expect(
      Math.max(...numbers(variable(runOn(localWaveActivity, cube), "activity")).filter((a) => !Number.isNaN(a))),
    ).toBeGreaterThan(0);
  });
  test("it is never negative", () => {
    for (const value of numbers(variable(runOn(localWaveActivity, uneven, { hemisphere: "both" }), "activity")))
      expect(value >= 0).toBe(true);
  });
  test("one cell raised by hand: the integral is that cell's alone", () => {
    // A ridge of +400 at 60°N on one of 36 columns lifts that cell to the height of 20°N: for equivalent latitudes from there
    // up to 55° it is air poleward of φe with ẑ > 0.
    const raised = 7;
    const z0 = (lat: number): number => 5850 - 10 * lat;
    const cube = cubeOf(
      evenRows(5),
      36,
      (lat, _lon, _j, i) => z0(Math.abs(lat)) + (lat === 60 && i === raised ? 395 : 0),
    );
    const out = runOn(localWaveActivity, cube);
    const { data } = variable(out, "anticyclonic_activity");
    const lats = latitudes(out);
    const rad = Math.PI / 180;
    const weight = Math.sin(62.5 * rad) - Math.sin(57.5 * rad);
    for (const phi of [30, 40, 50]) {
      // One cell out of order moves the cap's edge by less than half a row: Ze is still the row's own height.
      const want = ((z0(60) + 395 - z0(phi)) * weight * 6_371_229) / Math.cos(phi * rad);
      const got = data[lats.indexOf(phi) * 36 + raised];
      expect(Math.abs(got - want) <= limit(19, phi), `${phi}: ${got}, ${want}`).toBe(true);
      for (const i of [0, 6, 8, 35]) expect(data[lats.indexOf(phi) * 36 + i]).toBe(0);
    }
  });
  test("a lowered cell is cyclonic, equatorward of φe, and its own row counts half", () => {
    const z0 = (lat: number): number => 5850 - 10 * lat;
    const cube = cubeOf(evenRows(5), 36, (lat, _lon, _j, i) => z0(Math.abs(lat)) - (lat === 40 && i === 3 ? 195 : 0));
    const out = runOn(localWaveActivity, cube);
    const { data } = variable(out, "cyclonic_activity");
    const lats = latitudes(out);
    const rad = Math.PI / 180;
    const weight = Math.sin(42.5 * rad) - Math.sin(37.5 * rad);
    for (const [phi, share] of [
      [40, 0.5],
      [45, 1],
      [55, 1],
    ]) {
      const want = ((z0(phi) - z0(40) + 195) * share * weight * 6_371_229) / Math.cos(phi * rad);
      const got = data[lats.indexOf(phi) * 36 + 3];
      expect(Math.abs(got - want) <= limit(19, phi), `${phi}: ${got}, ${want}`).toBe(true);
    }
    expect(data[lats.indexOf(35) * 36 + 3]).toBe(0);
  });
});

describe("symmetries", () => {
  const even = cubeOf(
    evenRows(7.5),
    24,
    (lat, _lon, j, i) => 5850 - 8 * Math.abs(lat) + ((j * 31 + i * i * 17 + i * j * 7) % 97) * 4,
  );
  const mirrored: Cube = {
    ...even,
    values: even.values.map((_, at) => even.values[(24 - Math.floor(at / 24)) * 24 + (at % 24)]),
  };
  test("the southern hemisphere is the northern one mirrored, to the last bit", () => {
    const north = variable(runOn(localWaveActivity, even), "activity");
    const south = variable(runOn(localWaveActivity, mirrored, { hemisphere: "south" }), "activity");
    const rows = north.data.length / 24;
    for (let at = 0; at < north.data.length; at++)
      expect(south.data[(rows - 1 - Math.floor(at / 24)) * 24 + (at % 24)]).toBe(north.data[at]);
  });
  test("turned round the axis it turns along; Ze does not change but for rounding", () => {
    const turned: Cube = {
      ...even,
      values: even.values.map((_, at) => even.values[Math.floor(at / 24) * 24 + ((at + 5) % 24)]),
    };
    const a = variable(runOn(localWaveActivity, even), "activity").data;
    const b = variable(runOn(localWaveActivity, turned), "activity").data;
    for (let at = 0; at < a.length; at++) {
      const other = a[Math.floor(at / 24) * 24 + ((at + 5) % 24)];
      expect(Object.is(b[at], other), `${at}: ${b[at]}, ${other}`).toBe(true);
    }
  });
  test("both hemispheres together are each by itself", () => {
    const both = numbers(variable(runOn(localWaveActivity, even, { hemisphere: "both" }), "activity"));
    const north = numbers(variable(runOn(localWaveActivity, even), "activity"));
    expect(both.slice(-north.length)).toEqual(north);
  });
});

describe("guards", () => {
  test("the equator's row and the pole's are masked with their reasons, no other", () => {
    const cube = cubeOf(evenRows(10), 36, (lat, lon) => 5850 - 10 * Math.abs(lat) + lon / 10);
    const { data, reasons } = variable(runOn(localWaveActivity, cube), "activity");
    for (let at = 0; at < data.length; at++) {
      const row = Math.floor(at / 36);
      expect(reasons?.[at]).toBe(row === 0 ? reasonCode("equator") : row === 9 ? reasonCode("pole") : 0);
      expect(Number.isNaN(data[at])).toBe(row === 0 || row === 9);
    }
  });
  test("a missing height masks its hemisphere at its step and level, and no more", () => {
    const plane = cubeOf(evenRows(10), 36, (lat, lon) => 5850 - 10 * Math.abs(lat) + lon / 10);
    const values = new Float64Array(4 * plane.values.length);
    for (let p = 0; p < 4; p++) values.set(plane.values, p * plane.values.length);
    values[2 * plane.values.length + 12 * 36 + 3] = Number.NaN;
    const cube: Cube = { ...plane, values, steps: dailySteps(2), levels: Float64Array.of(500, 250) };
    const out = runOn(localWaveActivity, cube, { hemisphere: "both" }, { kind: "none" }, [1]);
    const { data, reasons, dims } = variable(out, "activity");
    expect(dims).toEqual(["time", "level", "latitude", "longitude"]);
    for (let at = 0; at < data.length; at++) {
      const row = Math.floor(at / 36) % 19;
      const isMissing = Math.floor(at / 36 / 19) === 2 && row > 9 && row < 18;
      const want = row === 9 ? "equator" : row % 18 === 0 ? "pole" : isMissing ? "missing" : "valid";
      expect(reasons?.[at], `${at}`).toBe(reasonCode(want));
      expect(Number.isNaN(data[at])).toBe(want !== "valid");
    }
    expect(out.notes.join()).toContain("cannot be put in order");
  });
  test("latitudes leave rows out, and change no number", () => {
    const whole = numbers(variable(runOn(localWaveActivity, uneven), "activity"));
    const some = runOn(localWaveActivity, uneven, { latitudes: [20, 50], parts: false });
    expect(some.variables.map(({ name }) => name)).toEqual(["activity"]);
    expect(latitudes(some)).toEqual([20, 25, 33, 44, 50]);
    expect(numbers(variable(some, "activity"))).toEqual(whole.slice(2 * 32, 7 * 32));
  });
  test("equal heights, and heights far apart in a few cells, are put in order all the same", () => {
    const flat = cubeOf(evenRows(10), 36, () => 5500);
    for (const value of variable(runOn(localWaveActivity, flat), "activity").data)
      expect(Number.isNaN(value) || value === 0).toBe(true);
    // One cell a million times as far off as the rest: all others share a bin.
    const far = (outlier: number): Cube =>
      cubeOf(evenRows(10), 36, (lat, _lon, j, i) =>
        lat === 0 && i === 0 ? outlier : 5850 - 10 * lat + ((j * 7 + i * 11) % 29),
      );
    const near = numbers(variable(runOn(localWaveActivity, far(6000)), "anticyclonic_activity"));
    const wide = numbers(variable(runOn(localWaveActivity, far(1e9)), "anticyclonic_activity"));
    expect(wide).toEqual(near);
  });
  test.each([
    [
      "a hemisphere that is not all there",
      evenRows(10).filter((lat) => lat > 15),
      "north",
      "northern hemisphere from the equator to the pole",
    ],
    ["rows that end far from the pole", evenRows(10).filter((lat) => lat < 75), "north", "run from -90.00° to 70.00°N"],
    ["the other hemisphere", evenRows(10).filter((lat) => lat >= 0), "south", "southern hemisphere"],
  ])("%s is refused", (_words, lat, hemisphere, words) => {
    expect(() =>
      runOn(
        localWaveActivity,
        cubeOf(lat, 36, () => 5500),
        { hemisphere },
      ),
    ).toThrow(words);
  });
  test("columns that do not close the circle, and a range without a row, are refused", () => {
    const cube = cubeOf(evenRows(10), 36, () => 5500);
    const open = { ...cube, lon: cube.lon.slice(0, 30), values: new Float64Array(19 * 30) };
    expect(() => runOn(localWaveActivity, open)).toThrow("do not close the circle");
    expect(() => runOn(localWaveActivity, cube, { latitudes: [61, 69] })).toThrow(
      "no row of the grid lies from 61° to 69°",
    );
  });
});

test("a long record is kept as float32 and says so; however it is cut, and with its parts or without, it is the same", () => {
  const nTime = 1400;
  const values = new Float64Array(nTime * uneven.values.length);
  for (let t = 0; t < nTime; t++)
    values.set(
      uneven.values.map((z, at) => z + ((t * at) % 7)),
      t * uneven.values.length,
    );
  const cube: Cube = { ...uneven, values, steps: dailySteps(nTime) };
  const whole = runOn(localWaveActivity, cube, { hemisphere: "both" });
  const cut = runOn(localWaveActivity, cube, { hemisphere: "both", parts: false }, { kind: "none" }, [1, 700, 701]);
  const [a, b] = [whole, cut].map((out) => variable(out, "activity").data);
  expect(a).toBeInstanceOf(Float32Array);
  expect(whole.notes.join()).toContain("float32");
  expect(b.findIndex((value, at) => !Object.is(value, a[at]))).toBe(-1);
});
