import { type BackgroundSpec, NO_BACKGROUND } from "../../../core/background/spec.ts";
import type { FieldDescription, FileContents } from "../../../core/formats/dataset.ts";
import { type Records, recordFields } from "../../../core/formats/record/record-fields.ts";
import { nearestRow } from "../../../core/grid/rows.ts";
import type { Case } from "./case.ts";

const PREFERRED_LEVELS = [500, 300, 250, 200] as const; // hPa, where the waves of the troposphere are looked at
const PREFERRED_LATITUDE = 55;
const FEWEST_FOR_MEAN = 6; // steps; a departure from the mean of fewer says more of the mean than of the step

/** Fields that a map can be drawn of: every field with at least two rows and columns. */
export function usableFields(contents: readonly FileContents[]): FieldDescription[] {
  return recordsOf(contents).fields.filter(({ grid }) => grid.lat.length > 1 && grid.lon.length > 2);
}

const kept = new WeakMap<readonly FileContents[], Records>();

/** What the open files hold together; made once for each set of files. */
export function recordsOf(contents: readonly FileContents[]): Records {
  let records = kept.get(contents);
  if (records === undefined) {
    records = recordFields(contents);
    kept.set(contents, records);
  }
  return records;
}

export function chosenFieldOf(kept: Case, contents: readonly FileContents[]): FieldDescription | null {
  return usableFields(contents).find((field) => field.key === kept.field) ?? null;
}

/** Index of the case's level among the field's; 0 on a field without levels. */
export function levelIndexOf(kept: Case, field: FieldDescription): number {
  const index = field.levels?.findIndex((level) => Math.abs(level - (kept.level ?? Number.NaN)) < 1e-3) ?? 0;
  return Math.max(0, index);
}

function firstField(fields: readonly FieldDescription[]): FieldDescription | null {
  const wanted = ["geopotential_height", "northward_wind", "eastward_wind", "air_temperature"];
  for (const quantity of wanted) {
    const candidates = fields.filter((field) => field.quantity === quantity);
    const full = candidates.find((field) => field.grid.closesCircle) ?? candidates[0];
    if (full !== undefined) return full;
  }
  return fields[0] ?? null;
}

function settledLevel(level: number | null, field: FieldDescription): number | null {
  const { levels } = field;
  if (levels === null || levels.length === 0) return null;
  const has = (wanted: number | null): number | undefined =>
    Array.from(levels).find((value) => Math.abs(value - (wanted ?? Number.NaN)) < 1e-3);
  for (const wanted of [level, ...PREFERRED_LEVELS]) {
    const found = has(wanted);
    if (found !== undefined) return found;
  }
  return levels[Math.floor(levels.length / 2)];
}

function settledMember(member: number | null, { members }: FieldDescription): number | null {
  if (members === null) return null;
  return member !== null && members.includes(member) ? member : (members[0] ?? null);
}

/** A band that the grid has; a single latitude becomes that of the nearest row, for that is the row whose waves are shown. */
function settledBand(band: readonly [number, number], field: FieldDescription): readonly [number, number] {
  const { lat } = field.grid;
  const south = lat[0];
  const north = lat[lat.length - 1];
  const spacing = Math.abs(lat[1] - lat[0]);
  const inside = (value: number): boolean => value >= south - spacing && value <= north + spacing;
  const row = (latitude: number): readonly [number, number] => {
    const found = lat[nearestRow(lat, latitude)];
    return [found, found];
  };
  if (inside(band[0]) && inside(band[1])) return band[0] === band[1] ? row(band[0]) : band;
  const middle = (south + north) / 2;
  const wanted = inside(PREFERRED_LATITUDE)
    ? PREFERRED_LATITUDE
    : inside(-PREFERRED_LATITUDE)
      ? -PREFERRED_LATITUDE
      : middle;
  return row(wanted);
}

/** A background that the record can have; a new case of very few steps starts without one. */
function settledBackground({ background, field: chosen }: Case, { steps }: FieldDescription): BackgroundSpec {
  const n = steps.values.length;
  if (n < 2 || (chosen === null && n < FEWEST_FOR_MEAN)) return NO_BACKGROUND;
  const needsTime = background.kind === "annual-cycle" || background.kind === "running-mean";
  return needsTime && steps.kind !== "time" ? { kind: "record-mean" } : background;
}

/**
 * The case made to fit what is open: a field, level, band and step that are there. What fits is left as it is.
 *
 * A background that the record cannot have gives way to the record's mean; one step has no mean to depart from.
 */
export function settledCase(kept: Case, contents: readonly FileContents[]): Case {
  const fields = usableFields(contents);
  const field = fields.find((candidate) => candidate.key === kept.field) ?? firstField(fields);
  if (field === null) return { ...kept, field: null };
  const steps = field.steps.values.length;
  const band = settledBand(kept.waves.band, field);
  const background = settledBackground(kept, field);
  const hasBackground = background.kind !== "none";
  const { lat } = field.grid;
  const isNew = kept.field === null;
  const isOnRow = kept.waves.band[0] === kept.waves.band[1] && kept.cursor.lat === kept.waves.band[0];
  const latitude = isNew || isOnRow ? (band[0] + band[1]) / 2 : kept.cursor.lat;
  const hemisphere = latitude < 0 ? "south" : "north";
  return {
    ...kept,
    field: field.key,
    level: settledLevel(kept.level, field),
    member: settledMember(kept.member, field),
    background,
    waves: { of: hasBackground ? kept.waves.of : "field", band },
    cursor: {
      lat: Math.min(lat[lat.length - 1], Math.max(lat[0], latitude)),
      lon: kept.cursor.lon,
      // A record of times starts at its latest, as one does on shift.
      step: isNew && field.steps.kind === "time" ? steps - 1 : Math.min(steps - 1, kept.cursor.step),
    },
    chart: {
      ...kept.chart,
      hemisphere: isNew ? hemisphere : kept.chart.hemisphere,
      shading: hasBackground ? kept.chart.shading : "field",
      kind: field.grid.closesCircle ? kept.chart.kind : "belt",
    },
  };
}
