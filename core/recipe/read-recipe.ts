import type { Diagnostic } from "../diagnostics/entry.ts";
import { DataError } from "../errors.ts";
import { CATALOGUE } from "./catalogue.ts";
import { jsonText } from "./json-text.ts";
import { rangeFaults } from "./options.ts";
import type { Recipe } from "./recipe.ts";
import { recipeSchema } from "./schema.ts";
import { type Fault, schemaFaults } from "./schema-check.ts";

const MOST_FAULTS = 12;

function recipeFaults(value: unknown, catalogue: readonly Diagnostic[]): Fault[] {
  const faults = schemaFaults(value, recipeSchema(catalogue));
  if (faults.length > 0) return faults;
  const recipe = value as Recipe;
  const seen = new Map<string, number>();
  recipe.results.forEach((result, i) => {
    const path = `results[${i}]`;
    const diagnostic = catalogue.find((candidate) => candidate.id === result.diagnostic);
    if (diagnostic !== undefined) faults.push(...rangeFaults(result, diagnostic, path));
    // Some file systems hold Waves.nc and waves.nc for the same file.
    const id = result.id.toLowerCase();
    const first = seen.get(id);
    if (first !== undefined)
      faults.push({ path: `${path}.id`, words: `"${result.id}" names results[${first}] already; each needs its own` });
    else seen.set(id, i);
  });
  return faults;
}

function refuse(faults: readonly Fault[], lineOf: (path: string) => number | undefined): never {
  const words = faults.slice(0, MOST_FAULTS).map(({ path, words }) => {
    const line = lineOf(path);
    return `${line === undefined ? "" : `line ${line}, `}${path === "" ? "the recipe" : path}: ${words}.`;
  });
  if (faults.length > MOST_FAULTS) words.push(`… and ${faults.length - MOST_FAULTS} more.`);
  throw new DataError("RecipeError", words.join("\n"));
}

/**
 * A recipe that the window made, checked as one read from a file would be.
 *
 * @throws RecipeError naming every key at fault.
 */
export function checkedRecipe(value: unknown, catalogue: readonly Diagnostic[] = CATALOGUE): Recipe {
  const faults = recipeFaults(value, catalogue);
  if (faults.length > 0) refuse(faults, () => undefined);
  return value as Recipe;
}

/**
 * Read a recipe from its JSON text.
 *
 * @throws RecipeError naming line and key of everything at fault: "line 7, results[1].waves: …".
 */
export function readRecipe(text: string, catalogue: readonly Diagnostic[] = CATALOGUE): Recipe {
  const { value, lines } = jsonText(text);
  const faults = recipeFaults(value, catalogue);
  if (faults.length > 0) refuse(faults, (path) => lines.get(path));
  return value as unknown as Recipe;
}
