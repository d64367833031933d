import { describe, expect, test } from "vitest";
import { numberText, signedText, unitParts } from "../../../../app/ui/text/number-text.ts";
import { bandText, latitudeText, longitudeText, westEast } from "../../../../app/ui/text/place-text.ts";
import { stepFlag, stepHeading, stepLine, stepTicks } from "../../../../app/ui/text/step-name.ts";
import { dailySteps, recordSteps } from "./fields.ts";

describe("numbers", () => {
  test("have a true minus, a narrow space from 1000 up, and no signed zero", () => {
    expect(numberText(-12.34, 1)).toBe("\u221212.3");
    expect(numberText(5616)).toBe("5\u202f616");
    expect(numberText(1234567.89, 1)).toBe("1\u202f234\u202f567.9");
    expect(numberText(999)).toBe("999");
    expect(numberText(-0.04, 1)).toBe("0.0");
    expect(numberText(Number.NaN)).toBe("–");
  });
  test("carry their sign where it matters", () => {
    expect(signedText(301)).toBe("+301");
    expect(signedText(-11)).toBe("\u221211");
    expect(signedText(0.3)).toBe("0");
    expect(signedText(Number.NaN)).toBe("–");
  });
  test("units part into text and exponent", () => {
    expect(unitParts("m s-1")).toEqual([
      { text: "m", exponent: null },
      { text: "s", exponent: "\u22121" },
    ]);
    expect(unitParts("m2 s-2")[0]).toEqual({ text: "m", exponent: "2" });
  });
});

describe("places", () => {
  test("longitudes lie in [-180, 180)", () => {
    for (const [given, wanted] of [
      [0, 0],
      [180, -180],
      [-180, -180],
      [190, -170],
      [360, 0],
      [-190, 170],
      [725, 5],
    ] as const)
      expect(westEast(given)).toBe(wanted);
  });
  test("have their side", () => {
    expect(longitudeText(-14.2)).toBe("14°W");
    expect(longitudeText(342.5, 1)).toBe("17.5°W");
    expect(longitudeText(0.2)).toBe("0°");
    expect(longitudeText(180)).toBe("180°");
    expect(longitudeText(107.6, 1)).toBe("107.6°E");
    expect(latitudeText(55)).toBe("55°N");
    expect(latitudeText(-2.5)).toBe("2.5°S");
    expect(latitudeText(0)).toBe("0°");
  });
  test("bands are told from the equator outward", () => {
    expect(bandText([55, 55])).toBe("55°N");
    expect(bandText([50, 60])).toBe("50–60°N");
    expect(bandText([-60, -50])).toBe("50–60°S");
    expect(bandText([-10, 10])).toBe("10°S–10°N");
  });
});

describe("steps", () => {
  test("are dates in UTC, or what the record calls them", () => {
    expect(stepHeading(dailySteps(60), 39)).toEqual({ day: "9 Feb 2001", hour: "00 UTC" });
    expect(stepLine(dailySteps(60, 4), 1)).toBe("1 Jan 2001 06 UTC");
    expect(stepLine(recordSteps(2), 1)).toBe("month 2");
    expect(stepFlag(dailySteps(60), 39)).toBe("9 Feb");
    expect(stepFlag(dailySteps(60, 4), 1)).toBe("1 Jan 06");
  });
  test("ticks stand on round days, name the first of each month, and keep apart", () => {
    const ticks = stepTicks(dailySteps(60), 0, 60, 12);
    expect(ticks.filter(({ isMain }) => isMain).map(({ text }) => text)).toEqual(["1 Jan", "1 Feb", "1 Mar"]);
    expect(ticks.map(({ text }) => text)).toContain("15");
    // No tick within three days of the next: the 30th would touch the 1st
    for (let i = 1; i < ticks.length; i++)
      expect((ticks[i]?.index ?? 0) - (ticks[i - 1]?.index ?? 0)).toBeGreaterThanOrEqual(3);
    expect(stepTicks(dailySteps(240, 4), 0, 240, 12).length).toBeLessThanOrEqual(16);
  });
  test("ticks of years name the years", () => {
    const ticks = stepTicks(dailySteps(365 * 6), 0, 365 * 6, 8);
    expect(ticks.map(({ text }) => text)).toContain("2002");
    expect(ticks.length).toBeLessThanOrEqual(9);
  });
  test("a record that is no time has its own numbers", () => {
    expect(stepTicks(recordSteps(3), 0, 3, 12).map(({ text }) => text)).toEqual(["1", "2", "3"]);
    expect(stepTicks(recordSteps(100), 0, 100, 12).length).toBeLessThanOrEqual(12);
  });
});
