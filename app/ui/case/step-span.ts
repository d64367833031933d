import type { IndexRange, StepAxis } from "../../../core/field/axes.ts";
import { isoText } from "../../../core/field/calendar.ts";

const WHOLE = 92; // steps: a season of days is shown whole
const PAGE_DAYS = 60;
const MOST_STEPS = 240;
/** Days before the ribbon's first step that the drifts and the amplitudes' curves look back. */
export const LOOK_BACK = 20;

function daysPerStep({ kind, values }: StepAxis): number {
  return kind === "time" && values.length > 1 ? (values[values.length - 1] - values[0]) / (values.length - 1) : 1;
}

/**
 * The steps that the ribbon shows: all of a short record, else a page of about sixty days around the step. Pages overlap by
 * half, and depend on the step alone, so that coming back shows the same page.
 */
export function ribbonSpan(steps: StepAxis, step: number): IndexRange {
  const n = steps.values.length;
  const perStep = daysPerStep(steps);
  const page = Math.min(MOST_STEPS, Math.max(PAGE_DAYS, Math.round(PAGE_DAYS / perStep)));
  if (n <= Math.max(WHOLE, page)) return [0, n];
  const half = page / 2;
  const start = Math.round((step - half) / half) * half;
  const from = Math.min(n - page, Math.max(0, start));
  return [from, from + page];
}

/** The ribbon's steps and the days before them that trailing numbers need. */
export function waveSpan(steps: StepAxis, [from, to]: IndexRange): IndexRange {
  if (steps.kind !== "time") return [from, to];
  const earliest = steps.values[from] - LOOK_BACK - 1e-6;
  let first = from;
  while (first > 0 && steps.values[first - 1] >= earliest) first -= 1;
  return [first, to];
}

/** A span as a recipe's period; undefined for the whole record. */
export function spanPeriod(
  steps: StepAxis,
  [from, to]: IndexRange,
): readonly [string | number, string | number] | undefined {
  if (from === 0 && to === steps.values.length) return undefined;
  const end = (i: number): string | number =>
    steps.kind === "time" ? isoText(steps.values[i], steps.calendar) : steps.values[i];
  return [end(from), end(to - 1)];
}

/** Index of the step a whole day before `step`, else the step before it; null at the record's start. */
export function stepBefore(steps: StepAxis, step: number): { readonly step: number; readonly isDay: boolean } | null {
  if (step <= 0) return null;
  if (steps.kind === "time") {
    const wanted = steps.values[step] - 1;
    for (let i = step - 1; i >= 0 && steps.values[i] >= wanted - 0.01; i--)
      if (Math.abs(steps.values[i] - wanted) <= 0.01) return { step: i, isDay: true };
  }
  return { step: step - 1, isDay: false };
}
