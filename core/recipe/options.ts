import type { Diagnostic, OptionSpec, OptionValue, OptionValues } from "../diagnostics/entry.ts";
import { DataError } from "../errors.ts";
import { memberPath } from "./json-text.ts";
import type { RecipeResult } from "./recipe.ts";
import { optionSchema } from "./schema.ts";
import { type Fault, schemaFaults } from "./schema-check.ts";

/** What JSON Schema cannot say: the ends of a range rise. */
export function rangeFaults(result: RecipeResult, diagnostic: Diagnostic, path: string): Fault[] {
  return diagnostic.options.flatMap((option) => {
    const value = result[option.name];
    if (option.kind !== "range" || !Array.isArray(value) || !(value[0] > value[1])) return [];
    return [
      { path: memberPath(path, option.name), words: `[${value.join(", ")}] runs downwards; the lower end comes first` },
    ];
  });
}

/** Values of all options that were given nothing. */
export function optionDefaults(options: readonly OptionSpec[]): OptionValues {
  return Object.fromEntries(options.map((option) => [option.name, option.default as OptionValue]));
}

/**
 * Options in force: what the recipe gives, checked, and the defaults for the rest.
 *
 * @param path Where the result stands, for messages: `results[0]`.
 * @throws OptionError naming the key: "results[0].band: …".
 */
export function optionsInForce(diagnostic: Diagnostic, result: RecipeResult, path: string): OptionValues {
  const given = diagnostic.options.filter((option) => result[option.name] !== undefined);
  const faults = given.flatMap((option) =>
    schemaFaults(result[option.name], optionSchema(option), memberPath(path, option.name)),
  );
  faults.push(...rangeFaults(result, diagnostic, path));
  if (faults.length > 0)
    throw new DataError("OptionError", faults.map((fault) => `${fault.path}: ${fault.words}.`).join("\n"));
  const values = given.map((option) => [option.name, result[option.name] as OptionValue] as const);
  return { ...optionDefaults(diagnostic.options), ...Object.fromEntries(values) };
}
