import { isTimeUnits } from "../../field/time-units.ts";
import { conversion } from "../../units/units.ts";
import type { StoredVariable } from "../variable-store.ts";
import { textOf } from "./attributes.ts";

export type DimensionRole = "latitude" | "longitude" | "level" | "time" | "other";

const LAT_UNITS = /^degrees?_?n(orth)?$/i;
const LON_UNITS = /^degrees?_?e(ast)?$/i;
const NAMES: readonly (readonly [RegExp, DimensionRole])[] = [
  [/^(lat|latitude|latitudes|nav_lat|lat_\d+|g\d_lat_\d+)$/i, "latitude"],
  [/^(lon|longitude|longitudes|nav_lon|lon_\d+|g\d_lon_\d+)$/i, "longitude"],
  [/^(time|times|valid_time|initial_time\d*_hours|t)$/i, "time"],
  [/^(lev|level|levels|plev|plev\d+|pressure|pressure_level|isobaric\w*|lv_isbl\d*|p)$/i, "level"],
];

/**
 * What a dimension is, by its coordinate variable: CF standard name, then units (CF 4.1 to 4.4), then axis, then its name.
 *
 * @param coordinate The variable of the dimension's name; undefined where there is none.
 */
export function dimensionRole(name: string, coordinate: StoredVariable | undefined): DimensionRole {
  const attributes = coordinate?.attributes ?? {};
  const standard = textOf(attributes, "standard_name");
  if (standard === "latitude" || standard === "longitude" || standard === "time") return standard;
  if (standard === "air_pressure") return "level";
  const units = textOf(attributes, "units") ?? "";
  if (LAT_UNITS.test(units)) return "latitude";
  if (LON_UNITS.test(units)) return "longitude";
  if (isTimeUnits(units)) return "time";
  if (units !== "" && conversion("pressure", units) !== null) return "level";
  const axis = textOf(attributes, "axis")?.toUpperCase();
  if (axis === "Z" || textOf(attributes, "positive") !== undefined) return "level";
  const byName = NAMES.find(([pattern]) => pattern.test(name))?.[1];
  // A "time" whose coordinate has units but none with "since" is a record, not a time.
  if (byName === "time" && !isTimeUnits(units)) return "other";
  return byName ?? "other";
}
