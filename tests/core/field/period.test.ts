import fc from "fast-check";
import { describe, expect, test } from "vitest";
import type { StepAxis } from "../../../core/field/axes.ts";
import { daysOf, isoText } from "../../../core/field/calendar.ts";
import { stepsOfPeriod } from "../../../core/field/period.ts";

const START = daysOf({ year: 2001, month: 2, day: 8 }, "standard");
const times = (values: readonly number[]): StepAxis => ({
  kind: "time",
  name: "time",
  values: Float64Array.from(values),
  calendar: "standard",
});
/** Every six hours from 8 February 2001, four days. */
const SIX_HOURLY = times(Array.from({ length: 16 }, (_, i) => START + i / 4));
const record = (values: readonly number[]): StepAxis => ({
  kind: "record",
  name: "month",
  values: Float64Array.from(values),
  calendar: "standard",
});
const YEAR = record(Array.from({ length: 12 }, (_, i) => i + 1));

describe("times", () => {
  test.each([
    ["2001-02-08", "2001-02-11", 0, 16],
    // A day without an hour is the whole day
    ["2001-02-09", "2001-02-09", 4, 8],
    ["2001-02-09T06:00Z", "2001-02-09", 5, 8],
    // With an hour, both ends included
    ["2001-02-09T06:00Z", "2001-02-09T06:00Z", 5, 6],
    ["2001-02-09 00:00", "2001-02-10 00:00", 4, 9],
    ["2001-02-09T05:00", "2001-02-09T19:00", 5, 8],
    ["1990-01-01", "2050-01-01", 0, 16],
  ])("%s to %s", (from, to, first, last) => {
    expect(stepsOfPeriod(SIX_HOURLY, [from, to])).toEqual([first, last]);
  });

  test("none given is all", () => {
    expect(stepsOfPeriod(SIX_HOURLY, undefined)).toEqual([0, 16]);
  });

  test("times that storage moved by less than half a second are still in, and the next midnight is still out", () => {
    const moved = times([START - 4e-6, START + 1 - 4e-6, START + 2 + 4e-6]);
    expect(stepsOfPeriod(moved, ["2001-02-08T00:00", "2001-02-09T00:00"])).toEqual([0, 2]);
    expect(stepsOfPeriod(moved, ["2001-02-08", "2001-02-08"])).toEqual([0, 1]);
    expect(stepsOfPeriod(moved, ["2001-02-08T00:00", "2001-02-10T00:00"])).toEqual([0, 3]);
  });

  test("days are those of the axis' calendar", () => {
    const values = [29, 30, 1].map((day, i) => daysOf({ year: 2001, month: i < 2 ? 2 : 3, day, hour: 12 }, "360_day"));
    const steps: StepAxis = { ...times(values), calendar: "360_day" };
    expect(stepsOfPeriod(steps, ["2001-02-30", "2001-02-30"])).toEqual([1, 2]);
    expect(() => stepsOfPeriod(SIX_HOURLY, ["2001-02-08", "2001-02-30"])).toThrow("is not a day of the standard");
  });

  test("the two ends of any stretch give it back", () => {
    const stretch = fc.tuple(fc.nat(15), fc.nat(15)).map(([a, b]) => [Math.min(a, b), Math.max(a, b)] as const);
    fc.assert(
      fc.property(stretch, ([first, last]) => {
        const text = (i: number) => isoText(SIX_HOURLY.values[i] as number, "standard");
        expect(stepsOfPeriod(SIX_HOURLY, [text(first), text(last)])).toEqual([first, last + 1]);
      }),
    );
  });

  test.each([
    [["2001-02-10", "2001-02-09"], "period: 2001-02-10 comes after 2001-02-09; the earlier comes first"],
    [["2001-02-09T12:00", "2001-02-09T06:00"], "the earlier comes first"],
    [
      ["2002-01-01", "2002-02-01"],
      "no step lies from 2002-01-01 to 2002-02-01; the record runs 2001-02-08T00:00:00Z to 2001-02-11T18:00:00Z",
    ],
    [["1999-01-01", "1999-02-01"], "no step lies"],
    [["2001-02-09T01:00", "2001-02-09T02:00"], "no step lies"],
    [[3, 5], 'the first is 3, but the steps are times; write a date like "2001-02-09"'],
    [["2001-02-09", 5], "the last is 5, but the steps are times"],
  ] as const)("%j is refused", (period, words) => {
    expect(() => stepsOfPeriod(SIX_HOURLY, period)).toThrow(expect.objectContaining({ name: "RecipeError" }));
    expect(() => stepsOfPeriod(SIX_HOURLY, period)).toThrow(words);
  });

  test("text that is no date is refused as one, and so is a field without steps", () => {
    expect(() => stepsOfPeriod(SIX_HOURLY, ["last year", "2001-02-09"])).toThrow(
      expect.objectContaining({ name: "MetadataError", message: expect.stringContaining("is not a date") }),
    );
    expect(() => stepsOfPeriod(times([]), undefined)).toThrow("the field has no steps");
  });
});

describe("records that are no times", () => {
  test.each([
    [3, 5, 2, 5],
    ["3", "5", 2, 5],
    [6.5, 100, 6, 12],
    [7, 7, 6, 7],
  ])("months %j to %j", (from, to, first, last) => {
    expect(stepsOfPeriod(YEAR, [from, to])).toEqual([first, last]);
  });

  test.each([
    [[5, 3], "5 comes after 3"],
    [[13, 14], "no step lies from 13 to 14; the record runs month 1 to month 12"],
    [["July", 8], 'the first is "July", but the steps are numbers of "month" and no times'],
    [["2001-02-09", "2001-02-10"], 'the first is "2001-02-09", but the steps are numbers of "month"'],
    [[1, " "], 'the last is " "'],
    [[1, Number.POSITIVE_INFINITY], "but the steps are numbers"],
  ] as const)("%j is refused", (period, words) => {
    expect(() => stepsOfPeriod(YEAR, period)).toThrow(words);
  });

  test("numbers out of order, or missing, make a period where they stand together", () => {
    const winter = record([11, 12, 1, 2]);
    expect(stepsOfPeriod(winter, [1, 12])).toEqual([0, 4]);
    expect(stepsOfPeriod(winter, [11, 12])).toEqual([0, 2]);
    expect(stepsOfPeriod(record([4, 3, 2, 1]), [2, 3])).toEqual([1, 3]);
    expect(() => stepsOfPeriod(winter, [2, 11])).toThrow('the numbers of "month" are not in order');
    expect(() => stepsOfPeriod(record([1, Number.NaN, 3]), [1, 3])).toThrow("are not in order");
  });
});
