import type { StepAxis } from "./axes.ts";
import { isoText } from "./calendar.ts";

/** A step for messages and tables: its date, or `month 7` on a record that is not a time. */
export function stepText(steps: StepAxis, index: number): string {
  const value = steps.values[index] ?? Number.NaN;
  return steps.kind === "time" ? isoText(value, steps.calendar) : `${steps.name} ${value}`;
}
