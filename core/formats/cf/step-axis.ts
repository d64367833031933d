import { DataError } from "../../errors.ts";
import type { StepAxis } from "../../field/axes.ts";
import { calendarNamed, isDateable } from "../../field/calendar.ts";
import { daysPerUnit, timeUnits } from "../../field/time-units.ts";
import type { StoredVariable, VariableStore } from "../variable-store.ts";
import { textOf } from "./attributes.ts";
import { decodeInPlace, decodingOf } from "./decoding.ts";

/** All values of a one-dimensional variable, decoded. */
export async function axisValues(store: VariableStore, variable: StoredVariable): Promise<Float64Array> {
  const start = variable.shape.map(() => 0);
  return decodeInPlace(await store.readNumbers(variable.name, start, variable.shape), decodingOf(variable));
}

/** @throws MetadataError for a calendar or units that cannot be read, or times that do not increase. */
export async function timeAxis(store: VariableStore, variable: StoredVariable): Promise<StepAxis> {
  const where = `${store.name}, ${variable.name}`;
  const named = textOf(variable.attributes, "calendar");
  const calendar = calendarNamed(named);
  if (calendar === null)
    throw new DataError("MetadataError", `${where}: the calendar "${named}" is not one of the CF conventions'.`);
  const { origin, daysPerUnit } = timeUnits(textOf(variable.attributes, "units") ?? "", calendar);
  const values = await axisValues(store, variable);
  for (let i = 0; i < values.length; i++) {
    values[i] = origin + (values[i] as number) * daysPerUnit;
    if (!Number.isFinite(values[i]))
      throw new DataError("MetadataError", `${where}: time ${i + 1} of ${values.length} is missing.`);
    if (!isDateable(values[i] as number))
      throw new DataError(
        "MetadataError",
        `${where}: time ${i + 1} of ${values.length} is ${values[i]} days from 1970, beyond any calendar. Correct its value or its units.`,
      );
    if (i > 0 && !((values[i] as number) > (values[i - 1] as number)))
      throw new DataError(
        "MetadataError",
        `${where}: times do not increase at step ${i + 1} of ${values.length}. Sort the file by time, and drop times that come twice.`,
      );
  }
  return { kind: "time", name: variable.name, values, calendar };
}

/**
 * Spans since a forecast's start, days, increasing.
 *
 * @throws MetadataError for units that are no span of time, or spans that do not increase.
 */
export async function leadDays(store: VariableStore, variable: StoredVariable): Promise<Float64Array> {
  const where = `${store.name}, ${variable.name}`;
  const units = textOf(variable.attributes, "units") ?? "";
  const perUnit = daysPerUnit(units);
  if (perUnit === null)
    throw new DataError("MetadataError", `${where}: forecast steps in "${units}" cannot be read; hours or days can.`);
  const values = (await axisValues(store, variable)).map((value) => value * perUnit);
  const bad = values.findIndex((value, i) => !Number.isFinite(value) || (i > 0 && value <= values[i - 1]));
  if (bad >= 0)
    throw new DataError("MetadataError", `${where}: forecast steps do not increase at step ${bad + 1}. Sort the file.`);
  return values;
}

/** Steps without numbers of their own take memory for each: only a damaged header promises more. */
const MOST_UNNUMBERED_STEPS = 1_000_000;

/** A record that is no time: its numbers, or 1, 2, 3 … where it has none of its own. */
export async function recordAxis(
  store: VariableStore,
  name: string,
  length: number,
  variable: StoredVariable | undefined,
): Promise<StepAxis> {
  const usable = variable !== undefined && variable.type !== "char" && variable.shape.length === 1;
  if (!usable && length > MOST_UNNUMBERED_STEPS)
    throw new DataError(
      "FormatError",
      `its axis ${name} has ${length} steps without values of their own; the file is damaged. Fetch it again.`,
    );
  const values = usable ? await axisValues(store, variable) : Float64Array.from({ length }, (_, i) => i + 1);
  return { kind: "record", name, values, calendar: "standard" };
}

/** A field without an axis that steps has one step. */
export const SINGLE_STEP: StepAxis = { kind: "record", name: "step", values: Float64Array.of(1), calendar: "standard" };
