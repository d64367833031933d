import { describe, expect, test } from "vitest";
import type { StepAxis } from "../../../core/field/axes.ts";
import { daysOf } from "../../../core/field/calendar.ts";
import { stepsOfPeriod } from "../../../core/field/period.ts";
import { chunkCuts } from "../../../core/recipe/chunk-cuts.ts";
import { chosenField, levelIndices } from "../../../core/recipe/field-selection.ts";
import { nearestWord } from "../../../core/recipe/nearest-word.ts";
import { WorkMeter } from "../../../core/recipe/progress.ts";
import { dailySteps, evenGrid, fakeContents } from "./fakes.ts";

const grid = evenGrid(5, 8);
const steps = dailySteps(10);
const field = (
  variable: string,
  levels: number[] | null,
  quantity: "geopotential_height" | null = "geopotential_height",
) => ({
  variable,
  quantity,
  levels: levels === null ? null : Float64Array.from(levels),
  grid,
  steps,
});

const monthly: StepAxis = { ...steps, values: steps.values.map((_, i) => 30 * i) };

describe("chosenField", () => {
  const files = [
    fakeContents("a.nc", [field("z", [500, 250]), field("x", null, null)]),
    // Monthly, and so no part of one record with the daily ones
    fakeContents("b.nc", [{ ...field("hgt", [1000]), steps: monthly }]),
  ];

  test("by key, whatever its quantity", () => {
    expect(chosenField("a.nc/x", null, files).field.variable).toBe("x");
  });

  test("by quantity, the level settling which, with a note", () => {
    expect(chosenField("geopotential_height", [1000], files)).toMatchObject({
      field: { key: "b.nc/hgt" },
      notes: ["b.nc/hgt was taken for geopotential_height: it alone has 1000 hPa (not a.nc/z)."],
    });
    expect(chosenField("geopotential_height", [500, 250], files).field.key).toBe("a.nc/z");
    expect(chosenField("geopotential_height", [500], [files[0]])).toMatchObject({ notes: [] });
  });

  test("several that serve equally: the user must say", () => {
    const words = 'Several fields are geopotential_height; say which in "field": "a.nc/z" or "b.nc/hgt"';
    expect(() => chosenField("geopotential_height", null, files)).toThrow(words);
    expect(() => chosenField("geopotential_height", [77], files)).toThrow(words);
  });

  test("what is not there is refused with what is", () => {
    expect(() => chosenField("a.nc/zz", null, files)).toThrow('did you mean "a.nc/z"?');
    expect(() => chosenField("geopotential_hight", null, files)).toThrow('did you mean "geopotential_height"?');
    expect(() => chosenField("air_temperature", null, files)).toThrow("a.nc/x (not recognised)");
    expect(() => chosenField("air_temperature", null, [])).toThrow("the files hold no usable field");
  });
});

describe("levelIndices", () => {
  const [described] = fakeContents("a.nc", [field("z", [1000, 500, 250.0005])]).fields;
  const [levelless] = fakeContents("a.nc", [field("z", null)]).fields;

  test("in the order asked, within 1e-3 hPa", () => {
    expect(levelIndices(described, [250, 1000])).toEqual([2, 0]);
    expect(levelIndices(described, null)).toEqual([0, 1, 2]);
    expect(levelIndices(levelless, null)).toBeNull();
  });

  test("refused in words", () => {
    expect(() => levelIndices(described, [500, 300])).toThrow(
      "a.nc/z has no level 300 hPa; it has 1000, 500, 250.0005 hPa",
    );
    expect(() => levelIndices(described, [500.002])).toThrow("has no level 500.002 hPa");
    expect(() => levelIndices(described, [500, 500.0001])).toThrow("names a level twice");
    expect(() => levelIndices(levelless, [500])).toThrow(
      'states no level, but 500 hPa is asked for; leave "level" out',
    );
  });
});

describe("stepsOfPeriod", () => {
  // Six-hourly from 2000-02-28 in the standard calendar (2000 has a 29 February: the Gregorian rule of 400 years).
  const first = daysOf({ year: 2000, month: 2, day: 28 }, "standard");
  const sixHourly: StepAxis = {
    kind: "time",
    name: "time",
    values: Float64Array.from({ length: 16 }, (_, i) => first + i / 4),
    calendar: "standard",
  };
  const months: StepAxis = { kind: "record", name: "month", values: Float64Array.of(1, 7, 12), calendar: "standard" };

  test.each([
    [undefined, [0, 16]],
    [
      ["2000-02-28", "2000-02-28"],
      [0, 4],
    ],
    [
      ["2000-02-29", "2000-03-01"],
      [4, 12],
    ],
    [
      ["2000-02-28T06:00Z", "2000-02-28T12:00Z"],
      [1, 3],
    ],
    [["2000-02-28T07:00", "2000-02-28T11:00"], null],
    [
      ["1990-01-01", "2010-01-01"],
      [0, 16],
    ],
  ] as const)("days include both ends: %j", (period, range) => {
    if (range === null) expect(() => stepsOfPeriod(sixHourly, period)).toThrow("no step lies from 2000-02-28T07:00");
    else expect(stepsOfPeriod(sixHourly, period)).toEqual(range);
  });

  test("a record that is not a time goes by its numbers", () => {
    expect(stepsOfPeriod(months, [7, 12])).toEqual([1, 3]);
    expect(stepsOfPeriod(months, ["1", "1"])).toEqual([0, 1]);
  });

  test.each([
    [sixHourly, ["2000-03-05", "2000-03-06"], "the record runs 2000-02-28T00:00:00Z to 2000-03-02T18:00:00Z"],
    [sixHourly, ["2000-03-02", "2000-03-01"], "2000-03-02 comes after 2000-03-01"],
    [sixHourly, [3, 4], "the steps are times; write a date"],
    [sixHourly, ["soon", "later"], '"soon" is not a date'],
    [sixHourly, ["2000-02-30", "2000-03-01"], "2000-2-30 is not a day of the standard calendar"],
    [months, ["2000-01-01", "2000-02-01"], 'the steps are numbers of "month" and no times'],
    [months, ["", 3], "numbers of"],
    [dailySteps(0), ["2000-01-01", "2000-02-01"], "the field has no steps"],
  ] as const)("refused in words %#", (axis, period, words) => {
    expect(() => stepsOfPeriod(axis, period)).toThrow(words);
  });
});

describe("chunkCuts", () => {
  test("8 MB of 64-bit numbers a chunk, gap-free", () => {
    const cuts = chunkCuts([3, 7308], 73 * 144, 0);
    // 2^20 / (73 · 144) = 99.75
    expect(cuts[0]).toEqual([3, 102]);
    expect(cuts).toHaveLength(Math.ceil(7305 / 99));
    for (const [i, [from]] of cuts.entries()) expect(from).toBe(i === 0 ? 3 : cuts[i - 1][1]);
    expect(cuts.at(-1)?.[1]).toBe(7308);
  });

  test("a field over 8 MB goes step by step; a halo makes chunks longer, up to 64 MB", () => {
    expect(chunkCuts([0, 3], 721 * 1440, 0)).toEqual([
      [0, 1],
      [1, 2],
      [2, 3],
    ]);
    expect(chunkCuts([0, 300], 721 * 1440, 60)[0]).toEqual([0, 8]);
    expect(chunkCuts([0, 300], 73 * 144, 60)[0]).toEqual([0, 120]);
  });
});

test("nearestWord: at most a third of the letters differ", () => {
  expect(nearestWord("levle", ["field", "level"])).toBe(null);
  expect(nearestWord("levl", ["field", "level"])).toBe("level");
  expect(nearestWord("Period", ["period"])).toBe("period");
  expect(nearestWord("qqqq", ["field", "level"])).toBeNull();
});

test("WorkMeter: the time left is that of the work left at the pace so far", () => {
  let now = 0;
  const seen: { done: number; secondsLeft: number | null }[] = [];
  const meter = new WorkMeter(
    ({ done, secondsLeft }) => seen.push({ done, secondsLeft }),
    () => now,
  );
  meter.plan(100);
  now = 400;
  meter.add(10);
  now = 1000;
  meter.add(40);
  meter.add(50);
  expect(seen).toEqual([
    { done: 0.1, secondsLeft: null },
    { done: 0.5, secondsLeft: 1 },
    { done: 1, secondsLeft: 0 },
  ]);
});
