import { DataError } from "../errors.ts";
import { QUANTITIES } from "../field/quantity.ts";
import type { FieldDescription, FileContents } from "../formats/dataset.ts";
import { recordFields } from "../formats/record/record-fields.ts";
import { nearestWord } from "./nearest-word.ts";

const LEVEL_TOLERANCE = 1e-3; // hPa; a level in Pa stored as float32 is off by at most 4e-5 hPa

export interface ChosenField {
  readonly field: FieldDescription;
  /** Why this one, where there was a choice to make, and how it was put together. */
  readonly notes: readonly string[];
}

/** Indices of `wanted` levels (hPa) among a field's; -1 where it has no such level. */
function indicesOf(levels: Float64Array | null, wanted: readonly number[]): number[] {
  return wanted.map((hPa) => levels?.findIndex((level) => Math.abs(level - hPa) <= LEVEL_TOLERANCE) ?? -1);
}

/** The levels asked for, in hPa; null = all. */
export function wantedLevels(level: number | readonly number[] | undefined): readonly number[] | null {
  if (level === undefined) return null;
  return typeof level === "number" ? [level] : level;
}

/**
 * The field that a recipe's `field` names: a quantity, or `file name/variable`.
 *
 * A quantity that several fields hold is settled by the levels if only one has them; otherwise the user must say.
 *
 * @throws NotFoundError listing what there is; RecipeError asking to name one of several.
 */
export function chosenField(
  name: string,
  levels: readonly number[] | null,
  files: readonly FileContents[],
): ChosenField {
  const { fields, notes } = recordFields(files);
  const exact =
    fields.find((field) => field.key === name) ??
    files.flatMap((file) => file.fields).find((field) => field.key === name);
  if (exact !== undefined) return { field: exact, notes: notes.get(exact.key) ?? [] };
  const candidates = fields.filter((field) => field.quantity === name);
  if (candidates.length === 1) return { field: candidates[0], notes: notes.get(candidates[0].key) ?? [] };
  if (candidates.length === 0) throw notFound(name, [...new Set([...fields, ...files.flatMap((file) => file.fields)])]);
  const fitting = candidates.filter((field) => levels === null || !indicesOf(field.levels, levels).includes(-1));
  if (fitting.length === 1 && levels !== null) {
    const others = candidates.filter((field) => field !== fitting[0]).map((field) => field.key);
    const note = `${fitting[0].key} was taken for ${name}: it alone has ${levels.join(", ")} hPa (not ${others.join(", ")}).`;
    return { field: fitting[0], notes: [note, ...(notes.get(fitting[0].key) ?? [])] };
  }
  const keys = (fitting.length > 0 ? fitting : candidates).map((field) => JSON.stringify(field.key));
  throw new DataError("RecipeError", `Several fields are ${name}; say which in "field": ${keys.join(" or ")}`);
}

function notFound(name: string, fields: readonly FieldDescription[]): DataError {
  const there = fields.map((field) => `${field.key} (${field.quantity ?? "not recognised"})`);
  const list = there.length === 0 ? "the files hold no usable field" : `there are: ${there.join(", ")}`;
  const near = nearestWord(name, [...Object.keys(QUANTITIES), ...fields.map((field) => field.key)]);
  const hint = near === null || near === name ? "" : `; did you mean ${JSON.stringify(near)}?`;
  return new DataError("NotFoundError", `No field is ${JSON.stringify(name)}${hint} (${list})`);
}

/**
 * Indices of the levels asked for, in the order asked.
 *
 * @param wanted hPa; null = all that the field has.
 * @returns null on a field without levels.
 * @throws NotFoundError listing the levels there are; RecipeError for a level asked twice.
 */
export function levelIndices(field: FieldDescription, wanted: readonly number[] | null): readonly number[] | null {
  const { levels } = field;
  if (levels === null) {
    if (wanted === null) return null;
    throw new DataError(
      "NotFoundError",
      `${field.key} states no level, but ${wanted.join(", ")} hPa is asked for; leave "level" out, or say its level in "corrections"`,
    );
  }
  if (wanted === null) return Array.from(levels, (_, i) => i);
  const indices = indicesOf(levels, wanted);
  const missing = wanted.filter((_, i) => indices[i] < 0);
  if (missing.length > 0)
    throw new DataError(
      "NotFoundError",
      `${field.key} has no level ${missing.join(", ")} hPa; it has ${Array.from(levels).join(", ")} hPa`,
    );
  if (new Set(indices).size < indices.length)
    throw new DataError("RecipeError", `"level" names a level twice: ${wanted.join(", ")} hPa`);
  return indices;
}

/**
 * Numbers of the members asked for, in the order asked; [null] on a field without members.
 *
 * @param wanted Absent = all that the field has.
 * @throws NotFoundError listing the members there are; RecipeError for one asked twice.
 */
export function wantedMembers(
  field: FieldDescription,
  wanted: number | readonly number[] | undefined,
): readonly (number | null)[] {
  const { members } = field;
  const asked = wanted === undefined ? undefined : typeof wanted === "number" ? [wanted] : wanted;
  if (members === null) {
    if (asked === undefined) return [null];
    throw new DataError("NotFoundError", `${field.key} has no members, but "member" asks for some; leave it out`);
  }
  if (asked === undefined) return members;
  const missing = asked.filter((member) => !members.includes(member));
  if (missing.length > 0)
    throw new DataError(
      "NotFoundError",
      `${field.key} has no member ${missing.join(", ")}; it has ${members.join(", ")}`,
    );
  if (new Set(asked).size < asked.length)
    throw new DataError("RecipeError", `"member" names a member twice: ${asked.join(", ")}`);
  return asked;
}
