import type { FieldDescription } from "../../../core/formats/dataset.ts";
import type { Recipe } from "../../../core/recipe/recipe.ts";
import type { Case } from "../case/case.ts";
import { chartPng, chartSvg } from "../chart/export-chart.ts";
import { bandText } from "../text/place-text.ts";
import { stepLine } from "../text/step-name.ts";
import { backgroundName } from "./BackgroundChoice.tsx";
import type { Picture } from "./use-picture.ts";
import { waveCsv } from "./wave-csv.ts";

export type ExportKind = "png" | "svg" | "csv" | "recipe";

/** What leaves the window, and under what name. */
export interface Exported {
  readonly suffix: string;
  readonly type: string;
  readonly content: string | Blob;
}

/** Size of an exported chart, px of its drawing. */
const SIZES = { hemisphere: [640, 640], belt: [960, 460] } as const;

/** The wave table at the case's step, in full digits. */
export function tableOf(kept: Case, field: FieldDescription, picture: Picture): string {
  return waveCsv(picture.readings, stepLine(field.steps, kept.cursor.step), bandText(kept.waves.band), field.units);
}

/** Lines under an exported chart: what it says, where its numbers come from, and the caution. */
function notesOf(kept: Case, field: FieldDescription, picture: Picture, version: string): string[] {
  return [
    picture.headline?.main ?? "",
    `${field.file}, ${field.variable} (${field.why}); background: ${backgroundName(kept.background)}. Isohypse ${version}.`,
    "Guidance, not a warning. Warnings and their wording are the responsible national service’s and a licensed forecaster’s.",
  ];
}

/**
 * What an export holds; null while there is no chart to draw.
 *
 * @param recipe The recipe behind the numbers on the screen.
 * @throws Error if the browser cannot make the picture.
 */
export async function exported(
  what: ExportKind,
  kept: Case,
  field: FieldDescription,
  picture: Picture,
  recipe: Recipe,
  version: string,
): Promise<Exported | null> {
  if (what === "csv") return { suffix: "-waves.csv", type: "text/csv", content: tableOf(kept, field, picture) };
  if (what === "recipe")
    return { suffix: ".recipe.json", type: "application/json", content: `${JSON.stringify(recipe, null, 2)}\n` };
  const { layers, view } = picture;
  if (layers === null) return null;
  const [width, height] = SIZES[view.kind];
  const notes = notesOf(kept, field, picture, version);
  if (what === "svg") {
    const svg = chartSvg(view, layers, kept.theme, width, height, notes);
    return { suffix: "-chart.svg", type: "image/svg+xml", content: svg };
  }
  const png = await chartPng(view, layers, kept.theme, width, height, notes);
  return { suffix: "-chart.png", type: "image/png", content: png };
}
