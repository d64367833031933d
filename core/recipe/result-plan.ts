import { backgroundTimes, needsPass } from "../background/background.ts";
import { runningMeanHalo } from "../background/running-mean.ts";
import { type BackgroundSpec, NO_BACKGROUND } from "../background/spec.ts";
import type { Diagnostic, InputSpec, OptionValues, Plan, Series } from "../diagnostics/entry.ts";
import { DataError } from "../errors.ts";
import { stepsOfPeriod } from "../field/period.ts";
import type { FieldDescription, FileContents } from "../formats/dataset.ts";
import { recordFields } from "../formats/record/record-fields.ts";
import { diagnosticOf } from "./catalogue.ts";
import { chosenField, levelIndices, wantedLevels, wantedMembers } from "./field-selection.ts";
import { optionsInForce } from "./options.ts";
import type { RecipeResult } from "./recipe.ts";

/** One result of a recipe, with everything settled that can be before a number is read. */
export interface ResultPlan {
  readonly result: RecipeResult;
  readonly diagnostic: Diagnostic;
  readonly options: OptionValues;
  readonly series: Series;
  readonly plan: Plan;
  /** By input name. */
  readonly fields: Readonly<Record<string, FieldDescription>>;
  readonly levelIndices: readonly number[] | null;
  /** Numbers of the members; [null] on a field without members. */
  readonly members: readonly (number | null)[];
  readonly notes: readonly string[];
}

function sameValues(a: Float64Array | null, b: Float64Array | null): boolean {
  return a === null || b === null ? a === b : a.length === b.length && a.every((value, i) => value === b[i]);
}

/** The field for an input that the recipe does not name: the one of that quantity on the same grid, steps and levels. */
function companionField(input: InputSpec, field: FieldDescription, files: readonly FileContents[]): FieldDescription {
  const fits = (other: FieldDescription): boolean =>
    (input.quantities === "any" || (other.quantity !== null && input.quantities.includes(other.quantity))) &&
    sameValues(other.grid.lat, field.grid.lat) &&
    sameValues(other.grid.lon, field.grid.lon) &&
    sameValues(other.steps.values, field.steps.values) &&
    sameValues(other.levels, field.levels) &&
    other.reference === field.reference &&
    JSON.stringify(other.members) === JSON.stringify(field.members);
  const alone = files.flatMap((file) => file.fields);
  const inFile = [...recordFields(files).fields, ...alone].filter(fits);
  const found = inFile.find((other) => other.file === field.file) ?? inFile[0];
  if (found !== undefined) return found;
  throw new DataError(
    "NotFoundError",
    `${input.about} is needed on the grid, steps and levels of ${field.key}, and no open field is that`,
  );
}

function checkedInput(input: InputSpec, field: FieldDescription, diagnostic: Diagnostic): void {
  const { quantities } = input;
  if (quantities === "any" || (field.quantity !== null && quantities.includes(field.quantity))) return;
  throw new DataError(
    "RecipeError",
    `${diagnostic.id} works on ${quantities.join(", ")}; ${field.key} is ${field.quantity ?? "not recognised: say what it is in corrections"}`,
  );
}

/**
 * Settle field, levels, steps, options and rows of a result.
 *
 * @param path Where the result stands in the recipe, for messages.
 * @throws DataError in words whenever the files or the series cannot serve.
 */
export function resultPlan(
  result: RecipeResult,
  path: string,
  background: BackgroundSpec,
  files: readonly FileContents[],
  catalogue: readonly Diagnostic[],
): ResultPlan {
  const diagnostic = diagnosticOf(result.diagnostic, catalogue);
  const options = optionsInForce(diagnostic, result, path);
  const levels = wantedLevels(result.level);
  const { field, notes } = chosenField(result.field, levels, files);
  const fields: Record<string, FieldDescription> = {};
  for (const input of diagnostic.inputs) {
    fields[input.name] = input.name === "field" ? field : companionField(input, field, files);
    checkedInput(input, fields[input.name], diagnostic);
  }
  const indices = levelIndices(field, levels);
  const series: Series = {
    grid: field.grid,
    steps: field.steps,
    times: stepsOfPeriod(field.steps, result.period),
    levels: indices === null ? null : Float64Array.from(indices, (index) => field.levels?.[index] ?? Number.NaN),
    quantity: field.quantity,
    units: field.units,
    background,
  };
  const plan = diagnostic.plan(series, options);
  // A background that this record cannot have is refused now, not after an hour of reading.
  if (plan.usesBackground)
    for (const { steps } of Object.values(fields)) {
      if (needsPass(background)) backgroundTimes(background, steps);
      else runningMeanHalo(background, steps);
    }
  return {
    result,
    diagnostic,
    options,
    series,
    plan,
    fields,
    levelIndices: indices,
    members: wantedMembers(field, result.member),
    notes,
  };
}

/** The background that a planned result really works with. */
export function backgroundInUse({ plan, series }: ResultPlan): BackgroundSpec {
  return plan.usesBackground ? series.background : NO_BACKGROUND;
}
