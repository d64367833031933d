import type { Coordinate } from "../diagnostics/entry.ts";
import type { Calendar } from "../field/axes.ts";
import { isoText } from "../field/calendar.ts";

export interface CoordinateText {
  readonly units: string;
  text(value: number): string;
}

/** How a coordinate's values are written in a table: times as dates, everything else as numbers that read back exactly. */
export function coordinateText(coordinate: Coordinate): CoordinateText {
  return numberText(coordinate.units, coordinate.attributes?.calendar);
}

/** The same for numbers in some units; days count in `calendar`. */
export function numberText(units: string, calendar: string | undefined): CoordinateText {
  if (calendar === undefined || !units.startsWith("days since 1970-01-01")) return { units, text: String };
  return { units: "UTC", text: (days) => isoText(days, calendar as Calendar) };
}
