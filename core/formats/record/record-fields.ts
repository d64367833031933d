import type { FieldDescription, FieldPart, FileContents } from "../dataset.ts";
import { joinedLevels, joinedMembers, joinedSteps, stepMark, usualStep } from "./record-axes.ts";
import { overlapNotes, recordGaps } from "./record-notes.ts";

/** What the files hold together. */
export interface Records {
  /** Every field, those that make one record joined to one. */
  readonly fields: readonly FieldDescription[];
  /** What was joined, what overlaps, what is missing, in words; by the record's key. */
  readonly notes: ReadonlyMap<string, readonly string[]>;
}

/** Steps that differ by more than this factor are no steps of one record: daily fields and monthly means. */
const LIKE_STEPS = 1.5;

function sameNumbers(a: ArrayLike<number> | null, b: ArrayLike<number> | null): boolean {
  if (a === null || b === null) return a === b;
  if (a.length !== b.length) return false;
  for (let i = 0; i < a.length; i++) if (a[i] !== b[i]) return false;
  return true;
}

/** True if two fields are of one kind: they may make one record if their steps, levels and members fit. */
function isAlike(a: FieldDescription, b: FieldDescription): boolean {
  const sameThing = a.quantity === null ? b.quantity === null && a.variable === b.variable : a.quantity === b.quantity;
  return (
    sameThing &&
    a.units === b.units &&
    a.apart !== true &&
    b.apart !== true &&
    a.steps.kind === b.steps.kind &&
    (a.steps.kind === "record" ? a.steps.name === b.steps.name : a.steps.calendar === b.steps.calendar) &&
    a.reference === b.reference &&
    (a.levels === null) === (b.levels === null) &&
    (a.members === null) === (b.members === null) &&
    sameNumbers(a.grid.lat, b.grid.lat) &&
    sameNumbers(a.grid.lon, b.grid.lon)
  );
}

/** Fields that make one record, and what is asked of the next that would join. */
interface Group {
  readonly fields: FieldDescription[];
  /** Usual days between steps of those that have several. */
  usual: number | null;
}

/** Steps of like spacing, or the very same steps; a record that is no time joins only where its steps are the same. */
function stepsFit(group: Group, field: FieldDescription): boolean {
  if (sameNumbers((group.fields[0] as FieldDescription).steps.values, field.steps.values)) return true;
  if (field.steps.kind === "record") return false;
  const own = usualStep(field.steps);
  return own === null || group.usual === null || (own <= group.usual * LIKE_STEPS && group.usual <= own * LIKE_STEPS);
}

/** True if the two hold a step, level and member in common. */
function overlaps(a: FieldDescription, b: FieldDescription): boolean {
  const levels = a.levels === null || a.levels.some((level) => b.levels?.includes(level));
  const members = a.members === null || a.members.some((member) => b.members?.includes(member));
  if (!levels || !members) return false;
  const marks = new Set(Array.from(a.steps.values, (_, i) => stepMark(a.steps, i)));
  return b.steps.values.some((_, i) => marks.has(stepMark(b.steps, i)));
}

/** True if two fields hold the very same steps, levels and members: rivals, such as two centres' analyses, and no parts of one record. */
function isRival(a: FieldDescription, b: FieldDescription): boolean {
  return (
    sameNumbers(a.levels, b.levels) &&
    sameNumbers(a.members, b.members) &&
    a.steps.values.length === b.steps.values.length &&
    a.steps.values.every((_, i) => stepMark(a.steps, i) === stepMark(b.steps, i))
  );
}

function joins(group: Group, field: FieldDescription): boolean {
  const [first] = group.fields as [FieldDescription];
  return (
    isAlike(first, field) &&
    stepsFit(group, field) &&
    // Two variables of one file that hold the same cells are two things.
    !group.fields.some((other) => other.file === field.file && overlaps(other, field))
  );
}

function groups(fields: readonly FieldDescription[]): FieldDescription[][] {
  const found: Group[] = [];
  for (const field of fields) {
    const home = found.find(
      (group) =>
        joins(group, field) && !(group.fields.length === 1 && isRival(group.fields[0] as FieldDescription, field)),
    );
    if (home === undefined) found.push({ fields: [field], usual: usualStep(field.steps) });
    else {
      home.fields.push(field);
      home.usual ??= usualStep(field.steps);
    }
  }
  // What was a rival of one file may be a second copy of a part of what has become a longer record.
  const whole = found.filter((group) => group.fields.length > 1);
  const copies = found.filter((group) => {
    const [field] = group.fields as [FieldDescription];
    if (group.fields.length > 1) return false;
    const home = whole.find((other) => joins(other, field) && other.fields.some((part) => isRival(part, field)));
    home?.fields.push(field);
    return home !== undefined;
  });
  return found.filter((group) => !copies.includes(group)).map((group) => group.fields);
}

function partOf(field: FieldDescription, whole: FieldDescription): FieldPart {
  const places = new Map(Array.from(whole.steps.values, (_, i) => [stepMark(whole.steps, i), i]));
  return {
    key: field.key,
    file: field.file,
    variable: field.variable,
    steps: Int32Array.from(field.steps.values, (_, i) => places.get(stepMark(field.steps, i)) as number),
    levels:
      field.levels === null
        ? Int32Array.of(0)
        : Int32Array.from(field.levels, (level) => (whole.levels as Float64Array).indexOf(level)),
    members:
      field.members === null
        ? Int32Array.of(0)
        : Int32Array.from(field.members, (member) => (whole.members as readonly number[]).indexOf(member)),
  };
}

/** `a.nc..c.nc/z`: the first and the last file of a record, and its variable. */
function recordName(fields: readonly FieldDescription[]): { file: string; variable: string } {
  const [first, last] = [fields[0] as FieldDescription, fields[fields.length - 1] as FieldDescription];
  const variables = [...new Set(fields.map(({ variable }) => variable))];
  return {
    file: first.file === last.file ? first.file : `${first.file}..${last.file}`,
    variable: variables.length === 1 ? (variables[0] as string) : variables.join("+"),
  };
}

function recordOf(group: readonly FieldDescription[]): { field: FieldDescription; notes: string[] } {
  // By time, then level, then name, so that the order in which files were named does not matter. Where two hold the same
  // cells, the one whose file name sorts last wins: it is put last.
  const ordered = group.toSorted(
    (a, b) =>
      stepMark(a.steps, 0) - stepMark(b.steps, 0) ||
      (b.levels?.[0] ?? 0) - (a.levels?.[0] ?? 0) ||
      (a.key < b.key ? -1 : 1),
  );
  const [first] = ordered as [FieldDescription];
  const { file, variable } = recordName(ordered);
  const start = first.key.indexOf("@", first.file.length) < 0 ? "" : first.key.slice(first.key.lastIndexOf("@"));
  const empty: FieldDescription = {
    ...first,
    key: `${file}/${variable}${start}`,
    file,
    variable,
    steps: joinedSteps(ordered),
    levels: joinedLevels(ordered),
    members: joinedMembers(ordered),
  };
  const byName = ordered.toSorted((a, b) => (a.key < b.key ? -1 : 1));
  const field = { ...empty, parts: byName.map((part) => partOf(part, empty)) };
  const files = new Set(ordered.map((part) => part.file)).size;
  const what = files === 1 ? `${ordered.length} variables of ${first.file}` : `${files} files`;
  return {
    field,
    notes: [`${field.key} is one record of ${what}.`, ...overlapNotes(field), ...recordGaps(field)],
  };
}

/**
 * The fields of open files, with those that make one record joined: along time, level or member, from several files or several
 * variables of one. Forecasts of different starts stay apart, and so do fields on other grids, in other calendars, or whose
 * steps are of another kind.
 *
 * The order of the files does not matter.
 */
export function recordFields(files: readonly Pick<FileContents, "file" | "fields">[]): Records {
  const all = files.toSorted((a, b) => (a.file < b.file ? -1 : 1)).flatMap(({ fields }) => fields);
  const notes = new Map<string, readonly string[]>();
  const fields = groups(all).map((group) => {
    if (group.length === 1) return group[0] as FieldDescription;
    const made = recordOf(group);
    notes.set(made.field.key, made.notes);
    return made.field;
  });
  return { fields, notes };
}
