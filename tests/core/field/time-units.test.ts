import { describe, expect, test } from "vitest";
import { daysOf } from "../../../core/field/calendar.ts";
import { daysPerUnit, isTimeUnits, timeUnits } from "../../../core/field/time-units.ts";

const EPOCH = daysOf({ year: 1900, month: 1, day: 1 }, "standard");

describe("units of time since a moment (CF conventions 4.4, after UDUNITS)", () => {
  test.each([
    ["days since 1900-01-01", 0, 1],
    ["hours since 1900-01-01 00:00:0.0", 0, 1 / 24],
    ["Minutes since 1900-1-1 12:00", 0.5, 1 / 1440],
    ["seconds since 1900-01-01T06:00:00Z", 0.25, 1 / 86_400],
    ["milliseconds since 1900-01-01 00:00:00.000", 0, 1 / 86_400_000],
    ["day since 1900-01-01 06", 0.25, 1],
    ["h since +1900-01-01 00:00 UTC", 0, 1 / 24],
    ["  days   SINCE 1900-01-01 00:00:30 GMT ", 30 / 86_400, 1],
    // A zone ahead of Greenwich has its midnight earlier.
    ["d since 1900-01-01 00:00:00 +2:00", -2 / 24, 1],
    ["hr since 1900-01-01 00:00 -0530", 5.5 / 24, 1 / 24],
    ["hr since 1900-01-01 00:00 +530", -5.5 / 24, 1 / 24],
    ["days since 1900-01-01 00:00:00-6", 6 / 24, 1],
    ["days since 1900-01-01 +14:00", -14 / 24, 1],
  ])("%s", (text, shift, perUnit) => {
    const units = timeUnits(text, "standard");
    // The last place of 25 567 days is 2⁻³⁸; both sides are rounded a few times.
    expect(Math.abs(units.origin - EPOCH - shift)).toBeLessThanOrEqual(2 ** -37);
    expect(units.daysPerUnit).toBe(perUnit);
  });

  test("the example of CF 4.4: six hours west of UTC, 15:15:42.5 is 21:15:42.5", () => {
    const { origin, daysPerUnit: perUnit } = timeUnits("seconds since 1992-10-8 15:15:42.5 -6:00", "standard");
    const utc = daysOf({ year: 1992, month: 10, day: 8, hour: 21, minute: 15, second: 42.5 }, "standard");
    expect(Math.abs(origin - utc)).toBeLessThanOrEqual(2 ** -38); // the last place of 8316 days is 2⁻⁴⁰; a few roundings
    expect(perUnit).toBe(1 / 86_400);
  });

  test.each([
    ["months since 1900-01-01", '"months" has no fixed length here; days, hours, minutes and seconds have'],
    ["years since 1900-01-01", "has no fixed length here"],
    ["common_years since 1900-01-01", "has no fixed length here"],
    ["m since 1900-01-01", "has no fixed length here"],
    ["days", 'they should look like "days since 1900-01-01 00:00:00"'],
    ["", "cannot be read"],
    ["days since yesterday", "cannot be read"],
    ["days since 1900", "cannot be read"],
    ["days since 1900-01-01 00:00:00 EST", "cannot be read"],
    ["day as %Y%m%d.%f", "cannot be read"],
    ["days since 1900-02-30", "1900-2-30 is not a day of the standard calendar"],
    ["days since 1900-13-01", "is not a day of the standard calendar"],
    ["days since 1582-10-10", "is not a day of the standard calendar"],
    ["days since 1900-01-01 24:00", "is not a time of day"],
    // From −12 to +14 hours: no other zones are in use (IANA time zone database).
    ["days since 1900-01-01 00:00 +99:00", "+99:00 is no time zone"],
    ["days since 1900-01-01 00:00 -1260", "-1260 is no time zone"],
  ])("%j is refused", (text, words) => {
    expect(() => timeUnits(text, "standard")).toThrow(words);
    expect(() => timeUnits(text, "standard")).toThrow(expect.objectContaining({ name: "MetadataError" }));
  });

  test("the moment is one of the calendar's own", () => {
    expect(timeUnits("days since 0000-01-01", "noleap").origin).toBe(-1970 * 365);
    expect(timeUnits("days since 2000-02-30", "360_day").origin).toBe(30 * 360 + 59);
    expect(timeUnits("days since 2001-02-29", "all_leap").origin).toBe(31 * 366 + 59);
    expect(() => timeUnits("days since 2000-01-31", "360_day")).toThrow("is not a day of the 360_day calendar");
    expect(() => timeUnits("days since 2000-02-29", "noleap")).toThrow("is not a day of the noleap calendar");
  });

  test("a year 0 of the calendar with the reform is 1 BC, which has 366 days", () => {
    // ISO 8601 and Meeus 1991, chapter 7: year 0 is there. The Julian year 0 divides by four.
    const zero = timeUnits("hours since 0000-01-01", "standard").origin;
    expect(timeUnits("hours since 1-1-1 00:00:0.0", "standard").origin - zero).toBe(366);
    // JD of 1 January of the year 1: 1721423.5 (Meeus, chapter 7, by its formula); 1970-01-01 is 2440587.5.
    expect(zero + 366 + 2_440_587.5).toBe(1_721_423.5);
  });
});

test("what looks like units of time at all", () => {
  expect(["days since 1900-01-01", "Months Since 1", "days", "since-less", "hPa"].map(isTimeUnits)).toEqual([
    true,
    true,
    false,
    true, // and refused by name when it is read
    false,
  ]);
});

test("spans of time, in days", () => {
  expect(["D", " hours ", "hrs", "min", "Secs", "ms"].map(daysPerUnit)).toEqual([
    1,
    1 / 24,
    1 / 24,
    1 / 1440,
    1 / 86_400,
    1 / 86_400_000,
  ]);
  expect(["month", "years", "m", "", "1", "days since 1900-01-01", "constructor"].map(daysPerUnit)).toEqual(
    Array.from({ length: 7 }, () => null),
  );
});
