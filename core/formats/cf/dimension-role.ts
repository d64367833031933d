import { daysPerUnit, isTimeUnits } from "../../field/time-units.ts";
import { conversion } from "../../units/units.ts";
import type { StoredVariable } from "../variable-store.ts";
import { textOf } from "./attributes.ts";

/** `lead` is the time since a forecast's start, `start` the start itself. */
export type DimensionRole = "latitude" | "longitude" | "level" | "time" | "lead" | "start" | "member" | "other";

const STANDARD_NAMES: Readonly<Record<string, DimensionRole>> = {
  latitude: "latitude",
  longitude: "longitude",
  air_pressure: "level",
  time: "time",
  forecast_period: "lead",
  forecast_reference_time: "start",
  realization: "member",
};
const LAT_UNITS = /^degrees?_?n(orth)?$/i;
const LON_UNITS = /^degrees?_?e(ast)?$/i;
const NAMES: readonly (readonly [RegExp, DimensionRole])[] = [
  [/^(lat|latitude|latitudes|nav_lat|lat_\d+|g\d_lat_\d+)$/i, "latitude"],
  [/^(lon|longitude|longitudes|nav_lon|lon_\d+|g\d_lon_\d+)$/i, "longitude"],
  [/^(forecast_reference_time|reference_time|reftime|init_time|initial_time|initial_time\d*_hours)$/i, "start"],
  [/^(step|steps|lead|leads|lead_?time|forecast_period|forecast_hour|forecast_time\d*|prediction_timedelta)$/i, "lead"],
  [/^(time|times|valid_time|t)$/i, "time"],
  [/^(lev|level|levels|plev|plev\d+|pressure|pressure_level|isobaric\w*|lv_isbl\d*|p)$/i, "level"],
  [/^(member|members|realization|realisation|number|ens|ensemble|ensemble\d+|ensemble_member)$/i, "member"],
];

/**
 * What a dimension is, by its coordinate variable: CF standard name, then units (CF 4.1 to 4.4), then axis, then its name.
 *
 * @param coordinate The variable of the dimension's name; undefined where there is none.
 */
export function dimensionRole(name: string, coordinate: StoredVariable | undefined): DimensionRole {
  const attributes = coordinate?.attributes ?? {};
  const standard = textOf(attributes, "standard_name") ?? "";
  if (Object.hasOwn(STANDARD_NAMES, standard)) return STANDARD_NAMES[standard] as DimensionRole;
  const byName = NAMES.find(([pattern]) => pattern.test(name))?.[1];
  const units = textOf(attributes, "units") ?? "";
  if (LAT_UNITS.test(units)) return "latitude";
  if (LON_UNITS.test(units)) return "longitude";
  if (isTimeUnits(units)) return byName === "start" ? "start" : "time";
  if (byName === "lead" && daysPerUnit(units) !== null) return "lead";
  if (units !== "" && conversion("pressure", units) !== null) return "level";
  const axis = textOf(attributes, "axis")?.toUpperCase();
  if (axis === "Z" || textOf(attributes, "positive") !== undefined) return "level";
  if (axis === "E") return "member";
  // A time whose coordinate has no "since" in its units is a record, not a time; a step without a unit of time is none.
  if (byName === "time" || byName === "start" || byName === "lead") return "other";
  return byName ?? "other";
}
