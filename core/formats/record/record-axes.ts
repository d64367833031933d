import type { StepAxis } from "../../field/axes.ts";
import type { FieldDescription } from "../dataset.ts";

const SECONDS_PER_DAY = 86_400;

/** A step as a whole number that equal steps share: seconds of a time, the number itself of a record that is no time. */
export function stepMark(steps: StepAxis, index: number): number {
  const value = steps.values[index] as number;
  return steps.kind === "time" ? Math.round(value * SECONDS_PER_DAY) : value;
}

/** Usual days from step to step; null for fewer than two steps or for a record that is no time. */
export function usualStep({ kind, values }: StepAxis): number | null {
  if (kind !== "time" || values.length < 2) return null;
  const steps = Float64Array.from({ length: values.length - 1 }, (_, i) => values[i + 1] - values[i]).sort();
  // The lower of two in the middle: a gap must not pass for the rule.
  return steps[(steps.length - 1) >> 1] as number;
}

/** All steps of some fields, each once, in order. */
export function joinedSteps(fields: readonly FieldDescription[]): StepAxis {
  const { kind, name, calendar } = (fields[0] as FieldDescription).steps;
  const found = new Map<number, number>();
  for (const { steps } of fields)
    steps.values.forEach((value, i) => {
      const mark = stepMark(steps, i);
      if (!found.has(mark)) found.set(mark, value);
    });
  const values = Float64Array.from(found.values());
  return { kind, name, calendar, values: kind === "time" ? values.sort() : values };
}

/** All levels of some fields, from the ground up; null if none has levels. */
export function joinedLevels(fields: readonly FieldDescription[]): Float64Array | null {
  const [first] = fields;
  if (first === undefined || first.levels === null) return null;
  const all = first.levels;
  if (fields.every(({ levels }) => levels?.length === all.length && levels.every((level, i) => level === all[i])))
    return all;
  return Float64Array.from(new Set(fields.flatMap(({ levels }) => [...(levels ?? [])]))).sort((a, b) => b - a);
}

/** All members of some fields, in order; null if none has members. */
export function joinedMembers(fields: readonly FieldDescription[]): readonly number[] | null {
  if (fields[0]?.members === null || fields[0] === undefined) return null;
  return [...new Set(fields.flatMap(({ members }) => members ?? []))].sort((a, b) => a - b);
}
