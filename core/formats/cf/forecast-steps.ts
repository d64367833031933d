import { DataError } from "../../errors.ts";
import type { StepAxis } from "../../field/axes.ts";
import { isDateable, isoText } from "../../field/calendar.ts";
import type { StoredVariable, VariableStore } from "../variable-store.ts";
import { textOf } from "./attributes.ts";
import { leadDays, timeAxis } from "./step-axis.ts";

/** The steps of one forecast: valid times, and the start they belong to. */
export interface ForecastSteps {
  readonly steps: StepAxis;
  /** Days, as `steps` counts. */
  readonly reference: number;
  /** Which start of the file this is. */
  readonly index: number;
}

/** Where a file keeps the starts of its forecasts: an axis, or a single value beside the field. */
export function startVariable(store: VariableStore, variable: StoredVariable): StoredVariable | undefined {
  const named = (textOf(variable.attributes, "coordinates") ?? "").split(/\s+/);
  const isSingle = ({ shape }: StoredVariable): boolean => shape.every((n) => n === 1);
  const fits = (candidate: StoredVariable): boolean =>
    textOf(candidate.attributes, "standard_name") === "forecast_reference_time" &&
    isSingle(candidate) &&
    candidate.type !== "char";
  return (
    store.variables.find((candidate) => named.includes(candidate.name) && fits(candidate)) ?? store.variables.find(fits)
  );
}

/**
 * Valid times of each start in the file: start + lead.
 *
 * @param start Variable of the starts, one or several.
 * @param lead  Variable of the spans since the start.
 * @throws MetadataError as the axes do.
 */
export async function forecastSteps(
  store: VariableStore,
  start: StoredVariable,
  lead: StoredVariable,
): Promise<ForecastSteps[]> {
  const starts = await timeAxis(store, start);
  const leads = await leadDays(store, lead);
  return [...starts.values].map((reference, index) => {
    const values = leads.map((days) => reference + days);
    if (values.some((value) => !isDateable(value)))
      throw new DataError("MetadataError", `${store.name}, ${lead.name}: forecast steps reach beyond any calendar.`);
    return { steps: { kind: "time", name: lead.name, values, calendar: starts.calendar }, reference, index };
  });
}

/** A start as it stands in a field's key: 2011-01-10T12, or with minutes where it has any. */
export function startText(reference: number, calendar: StepAxis["calendar"]): string {
  const text = isoText(reference, calendar);
  const end = text.indexOf("T");
  return text.slice(end).startsWith("T") && text.slice(end + 3) === ":00:00Z"
    ? text.slice(0, end + 3)
    : text.slice(0, end + 6);
}
