import { expect, test } from "vitest";
import { emptyCase } from "../../../../app/ui/case/case.ts";
import { levelIndexOf, settledCase, usableFields } from "../../../../app/ui/case/settled-case.ts";
import { contentsOf, dailySteps, field, recordSteps } from "./fields.ts";

const START = emptyCase();

test("a new case starts on height at 500 hPa, at the latest time", () => {
  const wind = field({ variable: "u", quantity: "eastward_wind", units: "m s-1" });
  const settled = settledCase(START, [contentsOf(wind, field())]);
  expect(settled).toMatchObject({ field: "winter.nc/z", level: 500, background: { kind: "record-mean" } });
  expect(settled.cursor).toEqual({ lat: 55, lon: 0, step: 59 });
});

test("a full circle is taken before a region", () => {
  const region = field({
    variable: "a",
    grid: { lat: Float64Array.of(30, 40, 50), lon: Float64Array.of(-20, -10, 0), closesCircle: false },
  });
  expect(settledCase(START, [contentsOf(region, field())]).field).toBe("winter.nc/z");
  const alone = settledCase(START, [contentsOf(region)]);
  expect(alone.chart.kind).toBe("belt");
  expect(alone.waves.band).toEqual([50, 50]);
});

test("what fits is left as it is", () => {
  const settled = settledCase(START, [contentsOf(field())]);
  const chosen = {
    ...settled,
    level: 250,
    waves: { of: "field", band: [40, 60] },
    cursor: { lat: 20, lon: 40, step: 3 },
  } as const;
  expect(settledCase(chosen, [contentsOf(field())])).toEqual(chosen);
});

test("a single latitude becomes the row's own, and the cursor on it goes along", () => {
  const gaussian = field({
    grid: { lat: Float64Array.of(50.1, 52.9, 55.7), lon: field().grid.lon, closesCircle: true },
  });
  const settled = settledCase({ ...START, field: gaussian.key }, [contentsOf(gaussian)]);
  expect(settled.waves.band).toEqual([55.7, 55.7]);
  expect(settled.cursor.lat).toBe(55.7);
});

test("a grid of the southern half has its waves there", () => {
  const south = field({
    grid: { lat: Float64Array.of(-70, -55, -40), lon: field().grid.lon, closesCircle: true },
  });
  const settled = settledCase(START, [contentsOf(south)]);
  expect(settled.waves.band).toEqual([-55, -55]);
  expect(settled.chart.hemisphere).toBe("south");
});

test("few steps start without a background; one step cannot have one", () => {
  expect(settledCase(START, [contentsOf(field({ steps: recordSteps(2) }))]).background.kind).toBe("none");
  const chosen = { ...START, field: "winter.nc/z" };
  expect(settledCase(chosen, [contentsOf(field({ steps: recordSteps(2) }))]).background.kind).toBe("record-mean");
  const alone = settledCase(chosen, [contentsOf(field({ steps: dailySteps(1) }))]);
  expect([alone.background.kind, alone.waves.of, alone.chart.shading]).toEqual(["none", "field", "field"]);
});

test("a record that is no time has no annual cycle and no running mean", () => {
  for (const background of [
    { kind: "annual-cycle", harmonics: 2 },
    { kind: "running-mean", days: 9 },
  ] as const) {
    const settled = settledCase({ ...START, field: "winter.nc/z", background }, [
      contentsOf(field({ steps: recordSteps(12) })),
    ]);
    expect(settled.background).toEqual({ kind: "record-mean" });
  }
});

test("a shorter record draws the cursor in", () => {
  const late = { ...START, field: "winter.nc/z", cursor: { lat: 55, lon: 0, step: 59 } };
  expect(settledCase(late, [contentsOf(field({ steps: dailySteps(10) }))]).cursor.step).toBe(9);
});

test("levels are found within a thousandth of a hectopascal, as float32 pascals give them", () => {
  const rounded = field({ levels: Float64Array.of(850, 500.00002, 250) });
  const settled = settledCase({ ...START, level: 500 }, [contentsOf(rounded)]);
  expect(settled.level).toBe(500.00002);
  expect(levelIndexOf(settled, rounded)).toBe(1);
  expect(settledCase(START, [contentsOf(field({ levels: null }))]).level).toBe(null);
  expect(
    settledCase({ ...START, level: 500 }, [contentsOf(field({ levels: Float64Array.of(70, 50, 30) }))]).level,
  ).toBe(50);
});

test("a file without a map leaves no field", () => {
  const line = field({ grid: { lat: Float64Array.of(50), lon: field().grid.lon, closesCircle: true } });
  expect(usableFields([contentsOf(line)])).toEqual([]);
  expect(settledCase(START, [contentsOf(line)]).field).toBe(null);
});
