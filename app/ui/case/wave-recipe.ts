import type { IndexRange } from "../../../core/field/axes.ts";
import { type FieldDescription, filesOf } from "../../../core/formats/dataset.ts";
import type { Recipe } from "../../../core/recipe/recipe.ts";
import type { Case } from "./case.ts";
import { spanPeriod } from "./step-span.ts";

export const MOST_WAVES = 8;
export const DRIFT_DAYS = 10;

/**
 * The recipe behind every wave number of the window, and the one that Export writes: what is on the screen is what batch
 * computes.
 *
 * @param span Steps of the field that it covers.
 */
export function waveRecipe(kept: Case, field: FieldDescription, span: IndexRange): Recipe {
  const period = spanPeriod(field.steps, span);
  const files = filesOf(field);
  const corrections = kept.corrections.filter((correction) => files.includes(correction.file));
  return {
    isohypse: 1,
    title: kept.title,
    background: kept.background,
    ...(corrections.length > 0 ? { corrections } : {}),
    results: [
      {
        id: "waves",
        diagnostic: "zonal-waves",
        field: field.key,
        ...(kept.level === null ? {} : { level: kept.level }),
        ...(kept.member === null ? {} : { member: kept.member }),
        ...(period === undefined ? {} : { period }),
        band: kept.waves.band,
        waves: [1, MOST_WAVES],
        of: kept.waves.of,
        drift_days: DRIFT_DAYS,
      },
    ],
  };
}
