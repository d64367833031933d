import { describe, expect, test } from "vitest";
import { blocking } from "../../../../core/diagnostics/blocking.ts";
import { blockingIntensity, strengthClass } from "../../../../core/diagnostics/blocks/block-strength.ts";
import { greatCircle } from "../../../../core/diagnostics/blocks/great-circle.ts";
import type { OptionValues, Outcome } from "../../../../core/diagnostics/entry.ts";
import { daysOf } from "../../../../core/field/calendar.ts";
import { reasonCode } from "../../../../core/field/reasons.ts";
import { type Cube, dailySteps, numbers, runOn, variable } from "../run-diagnostic.ts";

const ROWS = (spacing: number): number[] => Array.from({ length: 180 / spacing + 1 }, (_, j) => -90 + spacing * j);

/** Heights by hand: z(step, latitude, longitude) on 5° unless said otherwise. */
function handCube(
  nTime: number,
  z: (t: number, lat: number, lon: number) => number,
  lat: readonly number[] = ROWS(5),
  nLon = 72,
): Cube {
  const lon = Float64Array.from({ length: nLon }, (_, i) => (360 / nLon) * i);
  const values = new Float64Array(nTime * lat.length * nLon);
  let at = 0;
  for (let t = 0; t < nTime; t++) for (const phi of lat) for (const l of lon) values[at++] = z(t, phi, l);
  return { values, lat: Float64Array.from(lat), lon, steps: dailySteps(nTime, 11_000), levels: Float64Array.of(500) };
}

/** Falls poleward by 6 m/°, without waves. */
const calm = (lat: number): number => 5850 - 6 * Math.abs(lat);
/** A dipole: a high of 500 m at 60° and a low of 300 m at 45° on the given columns. */
const dipole = (lat: number, isOn: boolean): number =>
  calm(lat) + (isOn && Math.abs(lat) === 60 ? 500 : 0) - (isOn && Math.abs(lat) === 45 ? 300 : 0);
const isWithin = (lon: number, west: number, east: number): boolean =>
  (lon - west + 360) % 360 <= (east - west + 360) % 360;

function events(out: Outcome, ...names: string[]): number[][] {
  if (!out.variables.some(({ name }) => name === "start")) return [];
  const columns = names.map((name) => numbers(variable(out, name)));
  return columns[0].map((_, row) => columns.map((column) => column[row]));
}

const run = (cube: Cube, options: OptionValues = {}): Outcome => runOn(blocking, cube, options);

describe("flags", () => {
  test("zonally symmetric heights that fall poleward have no blocking by any index", () => {
    const cube = handCube(12, (_, lat) => calm(lat));
    for (const [index, kind] of [
      ["one-dimensional", "none"],
      ["two-dimensional", "none"],
      ["anomaly", "record-mean"],
    ] as const) {
      const out = runOn(blocking, cube, { index, hemisphere: "both" }, { kind });
      expect(numbers(variable(out, "blocked")).some((flag) => flag !== 0)).toBe(false);
      expect(numbers(variable(out, "frequency")).every((share) => share === 0)).toBe(true);
      expect(out.variables.map(({ name }) => name)).not.toContain("start");
      expect(out.notes.join()).toContain("No event");
    }
  });

  test("a dipole is blocked exactly where its gradients reverse, in both hemispheres", () => {
    const cube = handCube(1, (_, lat, lon) => dipole(lat, isWithin(lon, 340, 20)));
    const out = run(cube, { hemisphere: "both" });
    const { data } = variable(out, "blocked");
    const latitudes = Array.from(out.coordinates.find(({ name }) => name === "latitude")?.values ?? []);
    expect(latitudes).toEqual([
      ...ROWS(5).filter((l) => l >= -75 && l <= -35),
      ...ROWS(5).filter((l) => l >= 35 && l <= 75),
    ]);
    for (let at = 0; at < data.length; at++) {
      const lat = latitudes[Math.floor(at / 72)];
      // φ = 60: GHGS = (−90 + 500 + 300)/15 = 47, GHGN = (−90 − 500)/15 = −39, and from 30° to 45° −26 m/°.
      expect(data[at], `${lat} ${(at % 72) * 5}`).toBe(
        Math.abs(lat) === 60 && isWithin((at % 72) * 5, 340, 20) ? 1 : 0,
      );
    }
  });

  test("limits are not themselves beyond: 0 and −10 and −5 m/° to the last metre", () => {
    const at = (ghgs: number, ghgn: number, far: number): number => {
      const rows: Record<number, number> = {
        60: 5400,
        45: 5400 - 15 * ghgs,
        75: 5400 + 15 * ghgn,
        30: 5400 - 15 * ghgs - 15 * far,
      };
      const cube = handCube(1, (_, lat) => rows[lat] ?? calm(lat));
      const { data } = variable(run(cube, { latitudes: [60, 60] }), "blocked");
      return data[0];
    };
    expect(at(1, -11, -6)).toBe(1);
    expect([at(0, -11, -6), at(1, -10, -6), at(1, -11, -5)]).toEqual([0, 0, 0]);
    expect(at(1 / 15, -10 - 1 / 15, -5 - 1 / 15)).toBe(1);
  });

  test("in one dimension one offset is enough, and the highest of those that block is the cell's height", () => {
    const lat = Array.from({ length: 45 }, (_, j) => -88 + 4 * j);
    const cube = handCube(
      6,
      (_, phi, lon) => calm(phi) + (isWithin(lon, 100, 140) ? (phi === 64 ? 400 : phi === 60 ? 150 : 0) : 0),
      lat,
    );
    const out = run(cube, { index: "one-dimensional" });
    const { data, dims } = variable(out, "blocked");
    expect(dims).toEqual(["time", "longitude"]);
    for (let i = 0; i < 72; i++) expect(data[i]).toBe(isWithin(5 * i, 100, 140) ? 1 : 0);
    // Δ = +4: 84°, 64°, 44°; Δ = 0: (150 − 120)/20 > 0 and (−120 − 150)/20 < −10 as well
    expect(
      events(out, "highest", "highest_latitude", "highest_longitude", "onset_longitude", "onset_latitude"),
    ).toEqual([[calm(64) + 400, 64, 100, expect.closeTo(120, 9), 64]]);
    const middle = run(cube, { index: "one-dimensional", offsets: [0] });
    expect(events(middle, "highest", "highest_latitude")).toEqual([[calm(60) + 150, 60]]);
  });

  test("on 10° rows the offsets fall on the same rows, and that is said", () => {
    const cube = handCube(1, (_, lat) => dipole(lat, true), ROWS(10), 36);
    const out = run(cube, { index: "one-dimensional" });
    expect(out.notes.join(" ")).toContain("the 3 offsets fall on one and the same rows");
    expect(out.notes.join(" ")).toContain("at most 4.00° away");
    // Ties go to the equator: 55° north of 40° is 50°, 25° south of it 20°, over real distances of 10° and 20°
    const rows: Record<number, number> = { 40: 5500, 20: 5499, 50: 5500 - 101, 10: 5700 };
    const two = run(
      handCube(1, (_, lat) => rows[lat] ?? 5000, ROWS(10), 36),
      { latitudes: [40, 40] },
    );
    expect(variable(two, "blocked").data[0]).toBe(1);
    const less = run(
      handCube(1, (_, lat) => ({ ...rows, 50: 5500 - 100 })[lat] ?? 5000, ROWS(10), 36),
      { latitudes: [40, 40] },
    );
    expect(variable(less, "blocked").data[0]).toBe(0);
  });

  test("a missing height makes unknown what needs it, and no more", () => {
    const cube = handCube(1, (_, lat, lon) =>
      lat === 75 && lon === 50 ? Number.NaN : dipole(lat, isWithin(lon, 0, 90)),
    );
    const two = variable(run(cube), "blocked");
    const row = (lat: number): number => (lat - 35) / 5;
    for (let at = 0; at < two.data.length; at++) {
      const isUnknown = at % 72 === 10 && [row(60), row(75)].includes(Math.floor(at / 72));
      expect(two.data[at] === 255).toBe(isUnknown);
      expect(two.reasons?.[at]).toBe(isUnknown ? reasonCode("missing") : 0);
    }
    expect(run(cube).notes.join()).toContain("neither blocked nor free");
    // In one dimension 75° is of no offset (76° goes there!) — of Δ = −4 alone, and another offset says blocked
    const one = variable(run(cube, { index: "one-dimensional" }), "blocked");
    expect(one.data[10]).toBe(1);
    const calmer = handCube(1, (_, lat, lon) => (lat === 75 && lon === 50 ? Number.NaN : calm(lat)));
    const unknown = variable(run(calmer, { index: "one-dimensional" }), "blocked");
    expect(unknown.data[10]).toBe(255);
    expect(numbers(unknown).filter((flag) => flag !== 0)).toEqual([255]);
    const frequency = variable(run(calmer, { index: "one-dimensional" }), "frequency");
    expect(frequency.data[10]).toBeNaN();
    expect(frequency.reasons?.[10]).toBe(reasonCode("missing"));
    expect(frequency.data[11]).toBe(0);
  });
});

describe("events", () => {
  /** A block on the dipole's rows for each step: [west, east] of its columns, null for none. */
  const story = (steps: readonly (readonly [number, number] | null)[]): Cube =>
    handCube(steps.length, (t, lat, lon) => {
      const span = steps[t];
      return dipole(lat, span != null && isWithin(lon, span[0], span[1]));
    });
  const at = (n: number, span: readonly [number, number] | null) => Array.from({ length: n }, () => span);

  test("five daily steps are five days, four are none", () => {
    const five = run(story([null, ...at(5, [350, 5]), null]));
    expect(events(five, "start", "end", "days", "onset_cut", "end_cut", "largest_width")).toEqual([
      [11_001, 11_005, 5, 0, 0, 20],
    ]);
    expect(events(run(story([null, ...at(4, [350, 5]), null])), "start")).toEqual([]);
    expect(events(run(story([null, ...at(4, [350, 5]), null]), { least_days: 4 }), "days")).toEqual([[4]]);
  });

  test("blocks under 15° wide belong to none, and count in the frequency", () => {
    const narrow = run(story(at(6, [355, 0])));
    expect(events(narrow, "start")).toEqual([]);
    expect(Math.max(...numbers(variable(narrow, "frequency")))).toBe(1);
    expect(events(run(story(at(6, [350, 0]))), "largest_width")).toEqual([[15]]);
    expect(events(run(story(at(6, [355, 0])), { least_width: 10 }), "largest_width")).toEqual([[10]]);
  });

  test("the record's ends are named; a way is a great circle's", () => {
    const out = run(
      story([
        [0, 20],
        [5, 25],
        [10, 30],
        [15, 35],
        [20, 40],
      ]),
    );
    expect(events(out, "onset_cut", "end_cut")).toEqual([[1, 1]]);
    expect(out.notes.join()).toContain("1 of 1 events touch the record's first or last step");
    // Along 60° 5° of longitude: haversine by hand
    const leg = 2 * 6371.229 * Math.asin(0.5 * Math.sin((2.5 * Math.PI) / 180));
    expect(events(out, "track_length")[0][0]).toBeCloseTo(4 * leg, 7);
    expect(numbers(variable(out, "step_longitude")).map((x) => Math.round(x * 1e9) / 1e9)).toEqual([
      10, 15, 20, 25, 30,
    ]);
    expect(numbers(variable(out, "step_event"))).toEqual([1, 1, 1, 1, 1]);
    expect(numbers(variable(out, "step_time"))).toEqual([11_000, 11_001, 11_002, 11_003, 11_004]);
  });

  test("a block that leaps without a shared cell is another one", () => {
    expect(events(run(story([...at(5, [0, 20]), ...at(5, [25, 45])])), "start", "end")).toEqual([
      [11_000, 11_004],
      [11_005, 11_009],
    ]);
    expect(events(run(story([...at(5, [0, 20]), ...at(5, [20, 45])])), "start", "end")).toEqual([[11_000, 11_009]]);
    expect(events(run(story([...at(5, [0, 20]), ...at(5, [20, 45])]), { least_overlap: 2 }), "start")).toHaveLength(2);
  });

  test("a step without it ends an event, unless that is asked to be survived", () => {
    const cube = story([null, ...at(5, [0, 20]), null, ...at(5, [0, 20]), null, null]);
    expect(events(run(cube), "start", "end")).toEqual([
      [11_001, 11_005],
      [11_007, 11_011],
    ]);
    const one = run(cube, { gap_steps: 1 });
    expect(events(one, "start", "end", "days", "onset_cut", "end_cut")).toEqual([[11_001, 11_011, 11, 1, 0]]);
    expect(variable(one, "step_time").data.length).toBe(10);
  });

  test("of two parts the one with the larger overlap inherits the name; of two that merge one goes on", () => {
    const cube = handCube(12, (t, lat, lon) => {
      const isWhole = t < 6;
      return dipole(lat, isWhole ? isWithin(lon, 0, 60) : isWithin(lon, 0, 20) || isWithin(lon, 30, 60));
    });
    const names = ["start", "end", "onset_longitude"];
    expect(events(run(cube), ...names)).toEqual([
      [11_000, 11_011, expect.closeTo(30, 9)],
      [11_006, 11_011, expect.closeTo(10, 9)],
    ]);
    const backwards = handCube(12, (t, lat, lon) => {
      const isWhole = t >= 6;
      return dipole(lat, isWhole ? isWithin(lon, 0, 60) : isWithin(lon, 0, 20) || isWithin(lon, 30, 60));
    });
    expect(events(run(backwards), ...names)).toEqual([
      [11_000, 11_005, expect.closeTo(10, 9)],
      [11_000, 11_011, expect.closeTo(45, 9)],
    ]);
  });

  test("six-hourly steps: twenty are five days", () => {
    const six = (n: number): Cube => {
      const cube = story([null, ...at(n, [0, 20]), null]);
      return { ...cube, steps: { ...cube.steps, values: cube.steps.values.map((_, i) => 11_000 + i / 4) } };
    };
    expect(events(run(six(20)), "start", "end", "days")).toEqual([[11_000.25, 11_005, 5]]);
    expect(events(run(six(19)), "start")).toEqual([]);
  });

  test("a gap in the record cuts an event, and says so; a step a little late does not", () => {
    const cube = story(at(12, [0, 20]));
    const late = (days: number): Cube => ({
      ...cube,
      steps: { ...cube.steps, values: cube.steps.values.map((day, i) => (i < 6 ? day : day + days)) },
    });
    const cut = run(late(0.75));
    expect(events(cut, "start", "end", "days", "onset_cut", "end_cut")).toEqual([
      [11_000, 11_005, 6, 1, 2],
      [11_006.75, 11_011.75, 6, 2, 1],
    ]);
    expect(cut.notes.join()).toContain("The record has a gap of over 1.5 usual steps");
    expect(cut.notes.join()).toContain("2 of 2 events are cut by a gap");
    expect(events(run(late(0.5)), "start", "end", "days")).toEqual([[11_000, 11_011.5, 12.5]]);
    // A gap is no gap to be survived
    expect(events(run(late(0.75), { gap_steps: 3 }), "start")).toHaveLength(2);
  });

  test("an event that ends beside missing values says so", () => {
    const cube = handCube(8, (t, lat, lon) => (t === 6 ? Number.NaN : dipole(lat, t > 0 && isWithin(lon, 0, 20))));
    const out = run(cube);
    expect(events(out, "start", "end", "onset_cut", "end_cut")).toEqual([[11_001, 11_005, 0, 3]]);
    expect(out.notes.join()).toContain("begin or end beside missing values");
  });

  test("long steps, a single step, and steps that are no time", () => {
    const cube = story([[0, 20], null, [0, 20]]);
    const monthly = run({ ...cube, steps: { ...cube.steps, values: Float64Array.of(10_957, 10_988, 11_017) } });
    expect(monthly.notes.join()).toContain("Steps are 29 days apart, so that every blocked step alone lasts");
    expect(events(monthly, "days")).toEqual([[29], [29]]);
    const single = run(story([[0, 20]]));
    expect(single.notes.join()).toContain("One step alone has no duration");
    const record = run({
      ...cube,
      steps: { ...cube.steps, kind: "record", name: "month", values: Float64Array.of(1, 2, 3) },
    });
    expect(record.variables.map(({ name }) => name)).toEqual(["blocked", "frequency"]);
    expect(record.notes.join()).toContain('steps along "month", which is no time');
    expect(Math.max(...numbers(variable(record, "frequency")))).toBe(2 / 3);
    expect(record.coordinates[0]).toMatchObject({ name: "time", attributes: { long_name: "month" } });
  });
});

test("frequencies by month and season count their own steps, in the record's calendar", () => {
  const cube = handCube(90, (t, lat) => dipole(lat, t % 3 === 0));
  const start = daysOf({ year: 2001, month: 1, day: 1 }, "360_day");
  const steps = { ...dailySteps(90, start), calendar: "360_day" } as const;
  const out = run({ ...cube, steps });
  const month = variable(out, "frequency_month");
  const season = variable(out, "frequency_season");
  expect(month.dims).toEqual(["month", "latitude", "longitude"]);
  const cells = 9 * 72;
  const at60 = 5 * 72;
  for (let m = 0; m < 12; m++) {
    // 30 days a month: every third is blocked
    expect(month.data[m * cells + at60]).toEqual(m < 3 ? 1 / 3 : Number.NaN);
    expect(month.reasons?.[m * cells + at60]).toBe(m < 3 ? 0 : reasonCode("missing"));
  }
  expect([0, 1, 2, 3].map((s) => season.data[s * cells + at60])).toEqual([20 / 60, 10 / 30, Number.NaN, Number.NaN]);
});

describe("strength", () => {
  test("Wiedenmann's formula by hand, and its classes", () => {
    // MZ 5800, Zu 5400, Zd 5500: RC = ½ (5600 + 5650) = 5625, BI = 100 (5800/5625 − 1) = 3.1111…
    expect(Math.abs(blockingIntensity(5800, 5400, 5500) - 28 / 9)).toBeLessThan(1e-13);
    expect([1.9, 2, 3, 4.3, 4.4, Number.NaN].map(strengthClass)).toEqual([1, 2, 2, 2, 3, Number.NaN]);
  });
  test("troughs are looked for on the centre's row, up and downstream, within half a wavelength", () => {
    const cube = handCube(5, (_, lat, lon) => {
      const deep =
        lat === 60 && lon === 330 ? -200 : lat === 60 && lon === 40 ? -100 : lat === 60 && lon === 90 ? -900 : 0;
      return dipole(lat, isWithin(lon, 0, 20)) + deep;
    });
    const mz = calm(60) + 500;
    const out = run(cube);
    const bi = blockingIntensity(mz, calm(60) - 200, calm(60) - 100);
    expect(events(out, "strength", "largest_strength", "strength_class")).toEqual([
      [expect.closeTo(bi, 12), bi, strengthClass(bi)],
    ]);
    // 25° up and downstream of 10°E end at 345°E and 35°E, before either trough; 80° reaches the deepest at 90°E
    expect(events(run(cube, { trough_reach: 25 }), "largest_strength")).toEqual([
      [blockingIntensity(mz, calm(60), calm(60))],
    ]);
    expect(events(run(cube, { trough_reach: 80 }), "largest_strength")).toEqual([
      [blockingIntensity(mz, calm(60) - 200, calm(60) - 900)],
    ]);
  });
  test("a missing height within the reach leaves the step without strength", () => {
    const cube = handCube(5, (t, lat, lon) =>
      t === 2 && lat === 60 && lon === 330 ? Number.NaN : dipole(lat, isWithin(lon, 0, 20)),
    );
    const out = run(cube);
    const { data, reasons } = variable(out, "step_strength");
    expect(Array.from(data, Number.isNaN)).toEqual([false, false, true, false, false]);
    expect(Array.from(reasons ?? [])).toEqual([0, 0, reasonCode("missing"), 0, 0]);
    expect(events(out, "largest_strength")[0][0]).not.toBeNaN();
  });
});

test("great circles: a quarter of the meridian, and across the date line", () => {
  // asin and sin of half a right angle, each good to 2⁻⁵³
  expect(Math.abs(greatCircle(10, 0, 10, 90) - (6371.229 * Math.PI) / 2)).toBeLessThan(1e-11);
  expect(Math.abs(greatCircle(179, 0, -179, 0) - (6371.229 * Math.PI) / 90)).toBeLessThan(1e-11);
});

test("the area of a block is that of its cells", () => {
  const out = run(handCube(5, (_, lat, lon) => dipole(lat, isWithin(lon, 0, 20))));
  const rad = Math.PI / 180;
  // Five cells of 5° on the row of 60°, edges midway
  const want = 6371.229 ** 2 * (Math.sin(62.5 * rad) - Math.sin(57.5 * rad)) * 25 * rad;
  expect(Math.abs(events(out, "largest_area")[0][0] / want - 1)).toBeLessThan(1e-14);
});

describe("persistent anomalies", () => {
  /** A departure of `size` at 45°, 0–20°E on the steps that `isOn`; a first step takes it all back, so that `calm` is the record's mean. */
  const departing = (nTime: number, isOn: (t: number) => boolean, size = 151, row = 45): Cube => {
    const count = Array.from({ length: nTime }, (_, t) => t).filter(isOn).length;
    const departure = (t: number): number => (t === 0 ? -size * count : isOn(t - 1) ? size : 0);
    return handCube(
      nTime + 1,
      (t, lat, lon) => calm(lat) + (Math.abs(lat) === row && isWithin(lon, 0, 20) ? departure(t) : 0),
    );
  };
  const first = { kind: "record-mean" } as const;
  const flags = (cube: Cube, options: OptionValues = {}, cuts: number[] = []): number[] => {
    const out = runOn(blocking, cube, { index: "anomaly", ...options }, first, cuts);
    const { data, shape } = variable(out, "blocked");
    const row = options.hemisphere === "south" ? shape[1] - 1 - 4 : 4; // 25, 30, 35, 40, 45
    return Array.from({ length: shape[0] - 1 }, (_, t) => data[((t + 1) * shape[1] + row) * 72]);
  };
  const blockedSteps = (got: number[]): number[] => got.flatMap((flag, t) => (flag === 1 ? [t] : []));

  test("a run counts from ten days on, on every one of its days, however the record is cut", () => {
    for (const cuts of [[], [1], [8], [5, 6, 7, 13]]) {
      expect(
        blockedSteps(
          flags(
            departing(20, (t) => t >= 4 && t < 14),
            {},
            cuts,
          ),
        ),
      ).toEqual([4, 5, 6, 7, 8, 9, 10, 11, 12, 13]);
      expect(
        blockedSteps(
          flags(
            departing(20, (t) => t >= 4 && t < 13),
            {},
            cuts,
          ),
        ),
      ).toEqual([]);
      expect(
        blockedSteps(
          flags(
            departing(20, (t) => t >= 4 && t !== 12),
            {},
            cuts,
          ),
        ),
      ).toEqual([]);
    }
    expect(
      blockedSteps(
        flags(
          departing(9, (t) => t % 2 === 0),
          { persistence: 0 },
        ),
      ),
    ).toEqual([0, 2, 4, 6, 8]);
  });
  test("the threshold itself is not beyond; other latitudes are measured as 45°, and lows as highs", () => {
    expect(blockedSteps(flags(departing(12, () => true, 150)))).toEqual([]);
    expect(blockedSteps(flags(departing(12, () => true, -151)))).toEqual([]);
    expect(
      blockedSteps(
        flags(
          departing(12, () => true, -151),
          { sign: "negative" },
        ),
      ),
    ).toHaveLength(12);
    expect(
      blockedSteps(
        flags(
          departing(12, () => true),
          { hemisphere: "south" },
        ),
      ),
    ).toHaveLength(12);
    // sin 45°/sin 60° = 0.8165: 183 m are 149.4, 184 m are 150.2
    for (const [size, want] of [
      [183, 0],
      [184, 1],
    ]) {
      const cube = departing(12, () => true, size, 60);
      const { data, shape } = variable(runOn(blocking, cube, { index: "anomaly" }, first), "blocked");
      expect(data[(5 * shape[1] + 7) * 72]).toBe(want);
    }
  });
  test("lows have no blocking intensity; a gap in the record ends a run", () => {
    const lows = runOn(
      blocking,
      departing(12, () => true, -200),
      { index: "anomaly", sign: "negative" },
      first,
    );
    expect(lows.variables.map(({ name }) => name)).toContain("largest_area");
    expect(lows.variables.map(({ name }) => name)).not.toContain("strength");
    const cube = departing(16, () => true);
    const gap = {
      ...cube,
      steps: { ...cube.steps, values: cube.steps.values.map((day, i) => (i > 8 ? day + 3 : day)) },
    };
    expect(blockedSteps(flags(gap))).toEqual([]);
    expect(blockedSteps(flags(gap, { persistence: 8 }))).toHaveLength(16);
  });
  test("a running mean's edges are named so; one mean for all seasons is remarked", () => {
    const cube = departing(30, () => true);
    const out = runOn(blocking, cube, { index: "anomaly" }, { kind: "running-mean", days: 5 });
    const { reasons, data } = variable(out, "blocked");
    expect(reasons?.[0]).toBe(reasonCode("edge"));
    expect(data[0]).toBe(255);
    expect(reasons?.[2 * 14 * 72]).toBe(0);
    const long = handCube(240, (_, lat) => calm(lat), ROWS(10), 36);
    expect(runOn(blocking, long, { index: "anomaly" }, { kind: "record-mean" }).notes.join()).toContain(
      "the annual cycle counts",
    );
  });
  test("a record that is no time takes every step for itself, and says so", () => {
    const cube = departing(6, (t) => t === 2);
    const record: Cube = { ...cube, steps: { ...cube.steps, kind: "record", name: "month" } };
    const out = runOn(blocking, record, { index: "anomaly" }, first);
    expect(out.notes.join()).toContain("Nor are departures held to a duration");
    // One step of seven, five columns
    expect(numbers(variable(out, "blocked")).filter((flag) => flag === 1)).toHaveLength(5);
  });
});

describe("guards", () => {
  const cube = handCube(1, (_, lat) => calm(lat));
  const cutTo = (from: number, to: number): Cube =>
    handCube(
      1,
      (_, lat) => calm(lat),
      ROWS(5).filter((lat) => lat >= from && lat <= to),
    );
  test.each<[string, () => unknown, string]>([
    [
      "a grid that misses 84°N",
      () => run(cutTo(-90, 80), { index: "one-dimensional" }),
      "needs a row near 84°N (80°, 60° and 40° with the offset 4°)",
    ],
    [
      "one hemisphere only",
      () => run(cutTo(0, 90), { index: "one-dimensional", hemisphere: "south" }),
      "needs a row near 76°S",
    ],
    [
      "one hemisphere only, in two dimensions",
      () => run(cutTo(0, 90), { hemisphere: "both" }),
      "needs rows from 35°S to 75°S",
    ],
    ["a grid that ends within the central latitudes", () => run(cutTo(-90, 60)), "needs rows from 35°N to 75°N"],
    [
      "a row poleward of the last",
      () => run(cutTo(-90, 80)),
      "needs a row near 85°N (15° steps from the central row 70°N)",
    ],
    ["a row beyond the pole", () => run(cube, { latitudes: [35, 80] }), "needs a row near 95°N"],
    ["no tropics", () => run(cutTo(20, 90)), "needs a row near 5°N"],
    [
      "no row poleward of 25°",
      () => runOn(blocking, cutTo(-90, 20), { index: "anomaly" }, { kind: "record-mean" }),
      "needs rows from 25°N to 90°N",
    ],
    [
      "rows too far apart",
      () =>
        run(
          handCube(1, (_, lat) => calm(lat), ROWS(30), 36),
          { latitudes: [60, 60] },
        ),
      "fall together at 60°N",
    ],
    [
      "an open circle",
      () => run({ ...cube, lon: cube.lon.slice(0, 60), values: new Float64Array(37 * 60) }),
      "do not close the circle",
    ],
    [
      "several levels",
      () => run({ ...cube, levels: Float64Array.of(500, 250), values: new Float64Array(2 * 37 * 72) }),
      'Name one in "level"',
    ],
    ["an anomaly without a background", () => run(cube, { index: "anomaly" }), "needs a background to depart from"],
    [
      "latitudes out of order",
      () => run(cube, { index: "one-dimensional", central_latitude: 85 }),
      "must fall in this order; they are 80°, 85° and 40°",
    ],
    ["no offset", () => run(cube, { index: "one-dimensional", offsets: [] }), "offsets: the list is empty"],
  ])("%s is refused", (_words, made, words) => {
    expect(made).toThrow(words);
  });
});
