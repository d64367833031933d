import { readFileSync } from "node:fs";
import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { CALENDARS, type Calendar } from "../../../core/field/axes.ts";
import {
  calendarNamed,
  dateOf,
  dayOfYearPhase,
  daysInMonth,
  daysInYear,
  daysOf,
  daysOfText,
  dayText,
  isDateable,
  isoText,
} from "../../../core/field/calendar.ts";

// Written by reference/make_calendars.py with cftime.
const REFERENCE = JSON.parse(readFileSync(new URL("reference/calendars.json", import.meta.url), "utf8")) as Record<
  Calendar,
  readonly (readonly [number, number, number, number, number, number])[]
>;

test.each(CALENDARS)("%s: days are those of cftime, there and back", (calendar) => {
  const rows = REFERENCE[calendar];
  expect(rows.length).toBeGreaterThan(90);
  expect(rows.filter(([year]) => year <= 0).length).toBeGreaterThan(15);
  for (const [year, month, day, hour, minute, days] of rows) {
    const own = daysOf({ year, month, day, hour, minute }, calendar);
    // Three million days with a fraction: the last place of a float64 is 2⁻³¹ there; both round once or twice.
    expect(Math.abs(own - days), `${year}-${month}-${day} ${hour}:${minute}`).toBeLessThanOrEqual(2 ** -30);
    expect(dateOf(days, calendar)).toEqual({ year, month, day, hour, minute, second: 0 });
  }
});

describe("days that are known by other names", () => {
  // Meeus 1991, Astronomical Algorithms, chapter 7 (from memory): Julian days at 0 h; day 0 here is JD 2440587.5.
  const JD_1970 = 2_440_587.5;
  test.each([
    [2000, 1, 1, 2_451_544.5],
    [1987, 1, 27, 2_446_822.5],
    [1900, 1, 1, 2_415_020.5],
    [1600, 1, 1, 2_305_447.5],
    [837, 4, 10, 2_026_871.5],
    [-1000, 7, 12, 1_356_000.5],
    [-4712, 1, 1, -0.5],
  ])("%d-%d-%d begins at Julian day %d", (year, month, day, jd) => {
    expect(daysOf({ year, month, day }, "standard") + JD_1970).toBe(jd);
  });

  test("4 October 1582 is followed by the 15th, and what lies between is no day", () => {
    const last = daysOf({ year: 1582, month: 10, day: 4 }, "standard");
    expect(daysOf({ year: 1582, month: 10, day: 15 }, "standard")).toBe(last + 1);
    expect(dateOf(last + 1, "standard").day).toBe(15);
    expect(daysInYear(1582, "standard")).toBe(355);
    expect(() => daysOf({ year: 1582, month: 10, day: 10 }, "standard")).toThrow(
      "is not a day of the standard calendar",
    );
    expect(daysOf({ year: 1582, month: 10, day: 10 }, "proleptic_gregorian")).toBeLessThan(last);
  });
});

test("every day of every calendar goes there and back", () => {
  const anyDay = fc.record({
    days: fc.integer({ min: -2_500_000, max: 2_900_000 }),
    calendar: fc.constantFrom(...CALENDARS),
  });
  fc.assert(
    fc.property(anyDay, fc.integer({ min: 0, max: 86_399 }), ({ days, calendar }, second) => {
      const at = days + second / 86_400;
      const date = dateOf(at, calendar);
      const back = daysOf(date, calendar);
      expect(Math.abs(back - at) * 86_400).toBeLessThan(0.5); // dates are whole seconds
      expect(date.day).toBeLessThanOrEqual(daysInMonth(date.year, date.month, calendar));
      const text = isoText(at, calendar);
      expect(Math.abs(daysOfText(text, calendar) - at) * 86_400).toBeLessThan(0.5);
    }),
  );
});

test("a year's months are the year, and its phase runs from 0 to 1", () => {
  for (const calendar of CALENDARS)
    for (const year of [1500, 1583, 1900, 2000, 2001, 2004]) {
      let days = 0;
      for (let month = 1; month <= 12; month++) days += daysInMonth(year, month, calendar);
      expect(days, `${calendar} ${year}`).toBe(daysInYear(year, calendar));
      const start = daysOf({ year, month: 1, day: 1 }, calendar);
      expect(dayOfYearPhase(start, calendar)).toBe(0);
      expect(dayOfYearPhase(start + days / 2, calendar)).toBe(0.5);
      expect(dayOfYearPhase(start + days - 0.25, calendar)).toBe(1 - 0.25 / days);
    }
});

describe("texts", () => {
  test("for screens and for files", () => {
    const at = daysOf({ year: 2001, month: 2, day: 9, hour: 6, minute: 30 }, "standard");
    expect(dayText(at, "standard")).toEqual({ day: "9 Feb 2001", hour: "06:30 UTC" });
    expect(dayText(at - 0.5 / 24, "standard").hour).toBe("06 UTC");
    expect(isoText(at, "standard")).toBe("2001-02-09T06:30:00Z");
    expect(isoText(daysOf({ year: -44, month: 3, day: 15 }, "standard"), "standard")).toBe("-000044-03-15T00:00:00Z");
  });

  test.each([
    ["2001-02-09", 0],
    ["2001-02-09T06:00Z", 0.25],
    [" 2001-02-09 06:00:00 ", 0.25],
    ["2001-02-09t0600", 0.25],
    ["2001-2-9 18", 0.75],
  ])("%s is read", (text, more) => {
    expect(daysOfText(text, "standard")).toBe(daysOf({ year: 2001, month: 2, day: 9 }, "standard") + more);
  });

  test.each(["9 Feb 2001", "2001-02-30", "2001-13-01", "2001-02-09T25:00Z", "2001-02-09T06:61", "", "2001-02"])(
    "%j is refused",
    (text) => {
      expect(() => daysOfText(text, "standard")).toThrow(/is not a (date|day|time)/);
    },
  );

  test("29 February only where there is one", () => {
    expect(() => daysOfText("2001-02-29", "noleap")).toThrow("not a day of the noleap calendar");
    expect(() => daysOfText("2004-02-29", "noleap")).toThrow();
    expect(daysOfText("2001-02-29", "all_leap")).toBe(daysOfText("2001-02-28", "all_leap") + 1);
    expect(daysOfText("2001-02-30", "360_day")).toBe(daysOfText("2001-02-29", "360_day") + 1);
    expect(() => daysOfText("2001-01-31", "360_day")).toThrow();
  });
});

test("numbers that are no date are refused", () => {
  for (const days of [Number.NaN, Number.POSITIVE_INFINITY, 1e12]) {
    expect(isDateable(days)).toBe(false);
    expect(() => dateOf(days, "standard")).toThrow("is no date of the standard calendar");
  }
});

test("names of the CF conventions, 4.4.1", () => {
  expect(["gregorian", "STANDARD", " 365_day ", "366_day", "360_day", "julian", undefined].map(calendarNamed)).toEqual([
    "standard",
    "standard",
    "noleap",
    "all_leap",
    "360_day",
    "julian",
    "standard",
  ]);
  expect(["martian", "none", "", "constructor", "__proto__"].map(calendarNamed)).toEqual([
    null,
    null,
    null,
    null,
    null,
  ]);
});
