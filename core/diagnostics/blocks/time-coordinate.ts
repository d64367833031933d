import type { Coordinate, Series } from "../entry.ts";

/** The selected steps; on an axis that is no time its own numbers, by its own name. */
export function timeCoordinate({ steps, times }: Series): Coordinate {
  const values = steps.values.slice(times[0], times[1]);
  return steps.kind === "time"
    ? {
        name: "time",
        values,
        units: "days since 1970-01-01 00:00:00",
        attributes: { standard_name: "time", calendar: steps.calendar },
      }
    : { name: "time", values, units: "1", attributes: { long_name: steps.name } };
}
