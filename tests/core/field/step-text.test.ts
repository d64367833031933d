import { expect, test } from "vitest";
import type { StepAxis } from "../../../core/field/axes.ts";
import { daysOf } from "../../../core/field/calendar.ts";
import { stepText } from "../../../core/field/step-text.ts";

test("a time is its date in ISO 8601, in the axis' own calendar", () => {
  const steps: StepAxis = {
    kind: "time",
    name: "time",
    values: Float64Array.of(daysOf({ year: 2001, month: 2, day: 30, hour: 6 }, "360_day")),
    calendar: "360_day",
  };
  expect(stepText(steps, 0)).toBe("2001-02-30T06:00:00Z");
});

test("a step that is no time is the axis' name and number", () => {
  const steps: StepAxis = {
    kind: "record",
    name: "month",
    values: Float64Array.of(1, 7, 7.5),
    calendar: "standard",
  };
  expect([0, 1, 2].map((i) => stepText(steps, i))).toEqual(["month 1", "month 7", "month 7.5"]);
});

test("a step that is not there has no text: words on a time axis, NaN on a record", () => {
  const steps = { name: "time", values: Float64Array.of(0), calendar: "standard" } as const;
  expect(() => stepText({ ...steps, kind: "time" }, 1)).toThrow("NaN days from 1970 is no date");
  expect(stepText({ ...steps, kind: "record" }, 1)).toBe("time NaN");
});
