import { isoText } from "../../core/field/calendar.ts";
import { stepText } from "../../core/field/step-text.ts";
import type { FieldDescription, FileContents } from "../../core/formats/dataset.ts";
import { recordFields } from "../../core/formats/record/record-fields.ts";

function span(values: Float64Array, digits: number): string {
  const text = (value: number): string => String(Number(value.toFixed(digits)));
  return values.length === 1 ? text(values[0]) : `${text(values[0])} … ${text(values[values.length - 1])}`;
}

function fieldListing(field: FieldDescription): string {
  const { grid, steps, levels, members, reference } = field;
  const n = steps.values.length;
  const ends =
    n === 0 ? "" : n === 1 ? `: ${stepText(steps, 0)}` : `: ${stepText(steps, 0)} … ${stepText(steps, n - 1)}`;
  const what = steps.kind === "time" ? `times (${steps.calendar} calendar)` : `steps of "${steps.name}", not a time`;
  const units = field.units === field.unitsInFile ? field.units : `${field.units} (from ${field.unitsInFile})`;
  const circle = grid.closesCircle ? "" : ", not the whole circle";
  return [
    `  ${field.key}`,
    `    ${field.longName === "" ? field.variable : field.longName}, ${units}`,
    `    ${field.quantity ?? "not recognised"}: ${field.why}`,
    `    ${n} ${what}${ends}`,
    ...(reference === null ? [] : [`    forecast from ${isoText(reference, steps.calendar)}`]),
    ...(members === null
      ? []
      : [`    ${members.length} member${members.length === 1 ? "" : "s"}: ${members.join(", ")}`]),
    levels === null ? "    no level stated" : `    ${levels.length} levels, hPa: ${Array.from(levels).join(", ")}`,
    `    ${grid.lat.length} rows ${span(grid.lat, 4)} °N, ${grid.lon.length} columns ${span(grid.lon, 4)} °E${circle}`,
  ].join("\n");
}

/** What a file holds and what it was taken for, as text. */
export function fileListing(contents: FileContents): string {
  const { file, format, bytes, fields, leftOut, notes, about } = contents;
  const lines = [`${file}: ${format}, ${bytes} bytes`];
  for (const [key, text] of Object.entries(about))
    lines.push(`  ${key}: ${text.replaceAll(/\s+/g, " ").slice(0, 200)}`);
  lines.push(...fields.map(fieldListing));
  if (fields.length === 0) lines.push("  no usable field");
  if (leftOut.length > 0) lines.push("  left out:", ...leftOut.map(({ variable, why }) => `    ${variable}: ${why}`));
  if (notes.length > 0) lines.push("  notes:", ...notes.map((note) => `    ${note}`));
  return lines.join("\n");
}

/** What several files make together, as text; empty where nothing is joined. */
export function recordListing(files: readonly FileContents[]): string {
  const { fields, notes } = recordFields(files);
  return [...notes]
    .map(([key, words]) => {
      const field = fields.find((one) => one.key === key);
      const listed = field === undefined ? `  ${key}` : fieldListing(field);
      return `${listed}\n${words.map((note) => `    ${note}`).join("\n")}`;
    })
    .join("\n");
}

/** The same as plain JSON: typed arrays as lists. */
export function listingJson(files: readonly FileContents[]): string {
  const plain = (_key: string, value: unknown): unknown =>
    value instanceof Float64Array || value instanceof Int32Array ? Array.from(value) : value;
  const { fields, notes } = recordFields(files);
  const records = [...notes].map(([key, words]) => ({ ...fields.find((one) => one.key === key), notes: words }));
  return JSON.stringify({ files, records }, plain, 2);
}
