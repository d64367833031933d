import { DataError } from "../../errors.ts";
import { type CalendarDate, dateOf, daysInMonth, daysOf } from "../../field/calendar.ts";

/** Seconds per unit of time; FM 92: edition 1 code table 4, edition 2 code table 4.4. */
const SECONDS: Readonly<Record<number, number>> = { 0: 60, 1: 3600, 2: 86_400, 10: 10_800, 11: 21_600, 12: 43_200 };
/** Months per unit: month, year, decade, 30 years, century. */
const MONTHS: Readonly<Record<number, number>> = { 3: 1, 4: 12, 5: 120, 6: 360, 7: 1200 };
/** Ten thousand years; only a damaged header says more. */
const LONGEST = 10_000 * 366 * 86_400;
const EDITION_1_ONLY: Readonly<Record<number, number>> = { 13: 900, 14: 1800, 254: 1 };
const EDITION_2_ONLY: Readonly<Record<number, number>> = { 13: 1 };

/** Seconds since 1970-01-01 00 UTC. @throws MetadataError for a date that is none. */
export function secondsOf(date: CalendarDate): number {
  return Math.round(daysOf(date, "standard") * 86_400);
}

/**
 * When a forecast is valid: start + step, both in seconds since 1970-01-01 00 UTC.
 *
 * Months and years are counted on the calendar, a day that the month does not have being its last.
 *
 * @param unit Code of the unit that `step` counts.
 * @throws MetadataError for a unit without a length, or a time beyond the calendar.
 */
export function validSeconds(edition: 1 | 2, start: number, step: number, unit: number): number {
  if (step === 0) return start;
  const seconds = SECONDS[unit] ?? (edition === 1 ? EDITION_1_ONLY : EDITION_2_ONLY)[unit];
  if (seconds !== undefined) {
    if (Math.abs(step * seconds) > LONGEST)
      throw new DataError("MetadataError", `its forecast step of ${step * seconds} seconds is longer than any`);
    return start + step * seconds;
  }
  const months = MONTHS[unit];
  if (months === undefined)
    throw new DataError("MetadataError", `its forecast step is in a unit of time, number ${unit}, that is not known`);
  const date = dateOf(start / 86_400, "standard");
  const all = 12 * date.year + date.month - 1 + step * months;
  const year = Math.floor(all / 12);
  const month = all - 12 * year + 1;
  if (year < 1 || year > 9999) throw new DataError("MetadataError", `its forecast step leads to the year ${year}`);
  const day = Math.min(date.day, daysInMonth(year, month, "standard"));
  return secondsOf({ ...date, year, month, day });
}
