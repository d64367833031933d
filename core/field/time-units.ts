import { DataError } from "../errors.ts";
import type { Calendar } from "./axes.ts";
import { daysOf } from "./calendar.ts";

/** Days per unit of time, with the spellings of the CF conventions (UDUNITS) that files really use. */
const DAYS_PER: readonly (readonly [spelling: RegExp, days: number])[] = [
  [/^(d|day|days)$/, 1],
  [/^(h|hr|hrs|hour|hours)$/, 1 / 24],
  [/^(min|mins|minute|minutes)$/, 1 / 1440],
  [/^(s|sec|secs|second|seconds)$/, 1 / 86_400],
  [/^(msec|msecs|millisecond|milliseconds|ms)$/, 1 / 86_400_000],
];

/** Days per unit of a span of time (`hours`, `days` …); null for months, years and what is no unit of time. */
export function daysPerUnit(unit: string): number | null {
  const plain = unit.trim().toLowerCase();
  return DAYS_PER.find(([spelling]) => spelling.test(plain))?.[1] ?? null;
}

/** Hours; zones in use reach from −12 to +14. */
const LARGEST_ZONE = 14;

export interface TimeUnits {
  /** Days since 1970-01-01 of the reference moment. */
  readonly origin: number;
  readonly daysPerUnit: number;
}

/** True for units of the form "… since …". */
export function isTimeUnits(units: string): boolean {
  return /\bsince\b/i.test(units);
}

/**
 * Read `days since 1900-01-01 00:00:00 +0:00` and its kin (CF conventions, 4.4).
 *
 * @throws MetadataError for units that cannot be read, months and years among them: their length is not fixed.
 */
export function timeUnits(text: string, calendar: Calendar): TimeUnits {
  const match =
    /^\s*(\S+)\s+since\s+([+-]?\d{1,6})-(\d{1,2})-(\d{1,2})(?:[T\s]+(\d{1,2})(?::(\d{1,2})(?::(\d{1,2}(?:\.\d*)?))?)?)?\s*(Z|UTC|GMT|[+-]\d{1,2}(?::?\d{2})?)?\s*$/i.exec(
      text,
    );
  if (match === null)
    throw new DataError(
      "MetadataError",
      `time units "${text}" cannot be read; they should look like "days since 1900-01-01 00:00:00".`,
    );
  const perUnit = daysPerUnit(match[1] as string);
  if (perUnit === null)
    throw new DataError(
      "MetadataError",
      `time units "${text}": "${match[1]}" has no fixed length here; days, hours, minutes and seconds have.`,
    );
  const part = (i: number): number => Number(match[i] ?? 0);
  const zone = /^([+-])(\d{1,2}):?(\d{2})?$/.exec(match[8] ?? "");
  const [zoneHours, zoneMinutes] = [Number(zone?.[2] ?? 0), Number(zone?.[3] ?? 0)];
  if (zoneMinutes > 59 || zoneHours + zoneMinutes / 60 > LARGEST_ZONE)
    throw new DataError("MetadataError", `time units "${text}": ${match[8]} is no time zone.`);
  const shift = (zone?.[1] === "-" ? -1 : 1) * (zoneHours / 24 + zoneMinutes / 1440);
  const origin =
    daysOf({ year: part(2), month: part(3), day: part(4), hour: part(5), minute: part(6), second: part(7) }, calendar) -
    shift;
  return { origin, daysPerUnit: perUnit };
}
