import { DataError } from "../errors.ts";
import type { Calendar } from "./axes.ts";

/** A moment in some calendar, UTC. */
export interface CalendarDate {
  /** As ISO 8601 and astronomers count: 1 is preceded by 0, in every calendar. */
  readonly year: number;
  /** 1 … 12. */
  readonly month: number;
  /** 1 … 31. */
  readonly day: number;
  readonly hour: number;
  readonly minute: number;
  readonly second: number;
}

const NAMES: Readonly<Record<string, Calendar>> = {
  standard: "standard",
  gregorian: "standard",
  proleptic_gregorian: "proleptic_gregorian",
  julian: "julian",
  noleap: "noleap",
  "365_day": "noleap",
  all_leap: "all_leap",
  "366_day": "all_leap",
  "360_day": "360_day",
};

/** The calendar behind a CF `calendar` attribute (CF conventions, 4.4.1); null if it is not one of them. Absent means standard. */
export function calendarNamed(attribute: string | undefined): Calendar | null {
  const name = (attribute ?? "standard").trim().toLowerCase();
  // Of the table alone: an attribute may well be "constructor".
  return Object.hasOwn(NAMES, name) ? (NAMES[name] as Calendar) : null;
}

const DAYS_BEFORE = [0, 31, 59, 90, 120, 151, 181, 212, 243, 273, 304, 334];
/** First day of the Gregorian reform, 1582-10-15, in days since 1970-01-01. */
const REFORM = -141_427;

function isLeap(year: number, calendar: Calendar): boolean {
  switch (calendar) {
    case "noleap":
    case "360_day":
      return false;
    case "all_leap":
      return true;
    case "julian":
      return year % 4 === 0;
    case "standard":
      if (year <= 1582) return year % 4 === 0;
      break;
  }
  return year % 4 === 0 && (year % 100 !== 0 || year % 400 === 0);
}

/** Days in a month of 1 … 12. */
export function daysInMonth(year: number, month: number, calendar: Calendar): number {
  if (calendar === "360_day") return 30;
  const plain = (DAYS_BEFORE[month] ?? 365) - (DAYS_BEFORE[month - 1] as number);
  return month === 2 && isLeap(year, calendar) ? 29 : plain;
}

/** Days in a year; 1582 of the standard calendar has 355. */
export function daysInYear(year: number, calendar: Calendar): number {
  if (calendar === "360_day") return 360;
  if (calendar === "standard" && year === 1582) return 355;
  return isLeap(year, calendar) ? 366 : 365;
}

/** Whole days from 0000-03-01 of the Julian or Gregorian rule to a date; March first, so that the leap day ends the year. */
function daysByRule(year: number, month: number, day: number, gregorian: boolean): number {
  const y = month > 2 ? year : year - 1;
  const m = (month + 9) % 12;
  const leaps = gregorian ? Math.floor(y / 4) - Math.floor(y / 100) + Math.floor(y / 400) : Math.floor(y / 4);
  return 365 * y + leaps + Math.floor((153 * m + 2) / 5) + day - 1;
}
// 1970-01-01 by each rule; on that day the Julian date is 13 days behind.
const EPOCH_GREGORIAN = daysByRule(1970, 1, 1, true);
const EPOCH_JULIAN = daysByRule(1970, 1, 1, false);
const EPOCH_JULIAN_DATE = daysByRule(1969, 12, 19, false);

/** Whole days from the calendar's own 1970-01-01 to a date, as a file's "days since 1970-01-01" counts them. */
function dayNumber(year: number, month: number, day: number, calendar: Calendar): number {
  switch (calendar) {
    case "proleptic_gregorian":
      return daysByRule(year, month, day, true) - EPOCH_GREGORIAN;
    case "julian":
      return daysByRule(year, month, day, false) - EPOCH_JULIAN;
    case "standard": {
      const gregorian = daysByRule(year, month, day, true) - EPOCH_GREGORIAN;
      return gregorian >= REFORM ? gregorian : daysByRule(year, month, day, false) - EPOCH_JULIAN_DATE;
    }
    case "360_day":
      return 360 * (year - 1970) + 30 * (month - 1) + day - 1;
    default: {
      const leap = calendar === "all_leap" ? 1 : 0;
      return (365 + leap) * (year - 1970) + (DAYS_BEFORE[month - 1] as number) + (month > 2 ? leap : 0) + day - 1;
    }
  }
}

/**
 * Days since 1970-01-01 00 UTC, counted in the date's own calendar.
 *
 * @throws MetadataError for a day that the calendar does not have, or a time that the day does not have.
 */
export function daysOf(
  date: Partial<CalendarDate> & Pick<CalendarDate, "year" | "month" | "day">,
  calendar: Calendar,
): number {
  const { year, month, day, hour = 0, minute = 0, second = 0 } = date;
  const inReform = calendar === "standard" && year === 1582 && month === 10 && day > 4 && day < 15;
  const whole = [year, month, day].every(Number.isInteger);
  if (!whole || month < 1 || month > 12 || day < 1 || day > daysInMonth(year, month, calendar) || inReform)
    throw new DataError("MetadataError", `${year}-${month}-${day} is not a day of the ${calendar} calendar.`);
  const isTime = hour >= 0 && hour < 24 && minute >= 0 && minute < 60 && second >= 0 && second < 60;
  if (!isTime) throw new DataError("MetadataError", `${hour}:${minute}:${second} is not a time of day.`);
  return dayNumber(year, month, day, calendar) + (hour + (minute + second / 60) / 60) / 24;
}

/** Days from 1970 that a year of six digits can hold, in the shortest calendar. */
const MOST_DAYS = 360 * 990_000;

/** True for a day number that has a date here: finite, and less than about a million years from 1970. */
export function isDateable(days: number): boolean {
  return Math.abs(days) <= MOST_DAYS;
}

/**
 * The date of a day number, to the nearest second.
 *
 * @throws MetadataError for a day number that has none: NaN, or a million years away.
 */
export function dateOf(days: number, calendar: Calendar): CalendarDate {
  if (!isDateable(days))
    throw new DataError("MetadataError", `${days} days from 1970 is no date of the ${calendar} calendar.`);
  const seconds = Math.round(days * 86_400);
  const whole = Math.floor(seconds / 86_400);
  const rest = seconds - whole * 86_400;
  // A first guess, then at most a few steps: months are walked, never divided.
  let year = 1970 + Math.floor(whole / (calendar === "360_day" ? 360 : 365.2425));
  while (dayNumber(year, 1, 1, calendar) > whole) year -= 1;
  while (dayNumber(year + 1, 1, 1, calendar) <= whole) year += 1;
  let month = 12;
  while (month > 1 && dayNumber(year, month, 1, calendar) > whole) month -= 1;
  let day = whole - dayNumber(year, month, 1, calendar) + 1;
  // October 1582 lost its 5th to 14th.
  if (calendar === "standard" && year === 1582 && month === 10 && day > 4) day += 10;
  return { year, month, day, hour: Math.floor(rest / 3600), minute: Math.floor((rest % 3600) / 60), second: rest % 60 };
}

/** Phase of the year in [0, 1): (day of year − 1 + h/24)/length of the year, in the calendar's own year. */
export function dayOfYearPhase(days: number, calendar: Calendar): number {
  const { year } = dateOf(days, calendar);
  const start = dayNumber(year, 1, 1, calendar);
  const phase = (days - start) / daysInYear(year, calendar);
  return phase < 0 ? 0 : phase >= 1 ? 0 : phase;
}

const two = (n: number): string => String(n).padStart(2, "0");
const MONTHS = ["Jan", "Feb", "Mar", "Apr", "May", "Jun", "Jul", "Aug", "Sep", "Oct", "Nov", "Dec"];

/** ISO 8601, UTC: `2001-02-09T00:00:00Z`. Years outside 0 … 9999 carry a sign. */
export function isoText(days: number, calendar: Calendar): string {
  const d = dateOf(days, calendar);
  const year =
    d.year >= 0 && d.year <= 9999
      ? String(d.year).padStart(4, "0")
      : `${d.year < 0 ? "-" : "+"}${String(Math.abs(d.year)).padStart(6, "0")}`;
  return `${year}-${two(d.month)}-${two(d.day)}T${two(d.hour)}:${two(d.minute)}:${two(d.second)}Z`;
}

/** For screens: `9 Feb 2001` and `00 UTC` (`06:30 UTC` between the hours). */
export function dayText(days: number, calendar: Calendar): { readonly day: string; readonly hour: string } {
  const d = dateOf(days, calendar);
  const hour = d.minute === 0 && d.second === 0 ? two(d.hour) : `${two(d.hour)}:${two(d.minute)}`;
  return { day: `${d.day} ${MONTHS[d.month - 1]} ${d.year}`, hour: `${hour} UTC` };
}

/**
 * Days of a date written as ISO 8601, with or without a time: `2001-02-09`, `2001-02-09T06:00Z`, `2001-02-09 06:00:00`.
 *
 * @throws MetadataError in words for any other text.
 */
export function daysOfText(text: string, calendar: Calendar): number {
  const match =
    /^\s*([+-]?\d{1,6})-(\d{1,2})-(\d{1,2})(?:[T\s]+(\d{1,2})(?::?(\d{2})(?::?(\d{2}(?:\.\d*)?))?)?\s*(?:Z|UTC)?)?\s*$/i.exec(
      text,
    );
  if (match === null)
    throw new DataError("MetadataError", `"${text}" is not a date; write it like 2001-02-09 or 2001-02-09T06:00Z.`);
  const [year, month, day, hour = 0, minute = 0, second = 0] = match
    .slice(1)
    .map((part) => (part === undefined ? undefined : Number(part)));
  return daysOf({ year: year as number, month: month as number, day: day as number, hour, minute, second }, calendar);
}
