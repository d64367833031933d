import { DataError } from "../errors.ts";
import type { IndexRange, StepAxis } from "./axes.ts";
import { daysOfText } from "./calendar.ts";
import { stepText } from "./step-text.ts";

const HALF_SECOND = 0.5 / 86_400; // days; times in a file are rounded that much at worst
const DAY_ONLY = /^\s*[+-]?\d{1,6}-\d{1,2}-\d{1,2}\s*$/;

/** The end as the axis counts: a number on a record, days on a time axis. */
function axisValue(end: string | number, steps: StepAxis, which: string): number {
  if (steps.kind === "time" && typeof end === "string") return daysOfText(end, steps.calendar);
  const value = typeof end === "number" ? end : Number(end.trim() === "" ? Number.NaN : end);
  if (steps.kind === "record" && Number.isFinite(value)) return value;
  throw new DataError(
    "RecipeError",
    steps.kind === "time"
      ? `period: ${which} is ${end}, but the steps are times; write a date like "2001-02-09"`
      : `period: ${which} is ${JSON.stringify(end)}, but the steps are numbers of "${steps.name}" and no times`,
  );
}

/**
 * The steps of a period, both ends included; an end that is a day without an hour includes the whole day.
 *
 * @throws RecipeError if the period cannot be read, runs backwards, holds no step, or is not one stretch; MetadataError for no date.
 */
export function stepsOfPeriod(
  steps: StepAxis,
  period: readonly [string | number, string | number] | undefined,
): IndexRange {
  const n = steps.values.length;
  if (n === 0) throw new DataError("RecipeError", "the field has no steps");
  if (period === undefined) return [0, n];
  const isTime = steps.kind === "time";
  const from = axisValue(period[0], steps, "the first");
  const to = axisValue(period[1], steps, "the last");
  const isWholeDay = isTime && typeof period[1] === "string" && DAY_ONLY.test(period[1]);
  if (from > to && !(isWholeDay && from < to + 1))
    throw new DataError("RecipeError", `period: ${period[0]} comes after ${period[1]}; the earlier comes first`);
  const slack = isTime ? HALF_SECOND : 0;
  const isInside = (value: number) =>
    value >= from - slack && (isWholeDay ? value < to + 1 - slack : value <= to + slack);
  const first = steps.values.findIndex(isInside);
  const last = steps.values.findLastIndex(isInside);
  if (first < 0) {
    const ends = `${stepText(steps, 0)} to ${stepText(steps, n - 1)}`;
    throw new DataError(
      "RecipeError",
      `period: no step lies from ${period[0]} to ${period[1]}; the record runs ${ends}`,
    );
  }
  // Times increase; the numbers of a record need not, and then one range of steps is not the period.
  if (!steps.values.subarray(first, last + 1).every(isInside))
    throw new DataError(
      "RecipeError",
      `period: the numbers of "${steps.name}" are not in order, so ${period[0]} to ${period[1]} is not one stretch of the record; sort the file along it`,
    );
  return [first, last + 1];
}
