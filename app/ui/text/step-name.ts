import type { StepAxis } from "../../../core/field/axes.ts";
import { dateOf, dayText } from "../../../core/field/calendar.ts";

const MONTHS = ["Jan", "Feb", "Mar", "Apr", "May", "Jun", "Jul", "Aug", "Sep", "Oct", "Nov", "Dec"];

/** A step as the ribbon's heading has it: `9 Feb 2001` and `00 UTC`; `month 1` and nothing on a record that is not a time. */
export function stepHeading(steps: StepAxis, index: number): { readonly day: string; readonly hour: string } {
  const value = steps.values[index] ?? Number.NaN;
  if (steps.kind === "time") return dayText(value, steps.calendar);
  return { day: `${steps.name} ${value}`, hour: "" };
}

/** The step in one line. */
export function stepLine(steps: StepAxis, index: number): string {
  const { day, hour } = stepHeading(steps, index);
  return hour === "" ? day : `${day} ${hour}`;
}

/** Short, for flags and axes: `9 Feb`, with the hour where a day has several steps. */
export function stepFlag(steps: StepAxis, index: number): string {
  const value = steps.values[index] ?? Number.NaN;
  if (steps.kind !== "time") return `${steps.name} ${value}`;
  const { month, day, hour } = dateOf(value, steps.calendar);
  return `${day} ${MONTHS[month - 1]}${isSubDaily(steps) ? ` ${String(hour).padStart(2, "0")}` : ""}`;
}

/** True where steps lie closer than a day. */
export function isSubDaily({ kind, values }: StepAxis): boolean {
  return kind === "time" && values.length > 1 && (values[values.length - 1] - values[0]) / (values.length - 1) < 0.999;
}

export interface StepTick {
  readonly index: number;
  readonly text: string;
  /** The first of a month, or of a year: set apart. */
  readonly isMain: boolean;
}

const DAY_GAPS = [1, 2, 5, 10, 15] as const;
const MONTH_GAPS = [1, 3, 6, 12] as const;

/** Ticks of a stretch of steps, about `many` of them: on round days of the month, with the first of each month named. */
export function stepTicks(steps: StepAxis, from: number, to: number, many: number): StepTick[] {
  const n = to - from;
  if (steps.kind !== "time") {
    const every = Math.max(1, Math.ceil(n / many));
    const ticks: StepTick[] = [];
    for (let i = from; i < to; i += every) ticks.push({ index: i, text: `${steps.values[i]}`, isMain: false });
    return ticks;
  }
  const days = steps.values[to - 1] - steps.values[from];
  const gap = DAY_GAPS.find((candidate) => days / candidate <= many * 1.25);
  const months = MONTH_GAPS.find((candidate) => days / (30.4 * candidate) <= many) ?? 12;
  const ticks: StepTick[] = [];
  let last = "";
  for (let i = from; i < to; i++) {
    const date = dateOf(steps.values[i], steps.calendar);
    const key = `${date.year} ${date.month} ${date.day}`;
    if (key === last) continue;
    last = key;
    const isFirst = date.day === 1;
    if (gap === undefined) {
      if (isFirst && (date.month - 1) % months === 0)
        ticks.push({
          index: i,
          text: date.month === 1 ? `${date.year}` : MONTHS[date.month - 1],
          isMain: date.month === 1,
        });
    } else if (isFirst) ticks.push({ index: i, text: `1 ${MONTHS[date.month - 1]}`, isMain: true });
    // The 31st or 30th would stand on the first's toes.
    else if (date.day % gap === 0 && (gap === 1 || date.day <= 31 - gap))
      ticks.push({ index: i, text: gap === 1 && i === from ? stepFlag(steps, i) : `${date.day}`, isMain: false });
  }
  return ticks;
}
