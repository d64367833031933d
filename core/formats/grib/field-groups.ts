import { SECONDS_PER_DAY } from "../../constants.ts";
import { DataError } from "../../errors.ts";
import type { StepAxis } from "../../field/axes.ts";
import type { Conversion } from "../../units/units.ts";
import { startText } from "../cf/forecast-steps.ts";
import { recognition } from "../cf/quantity-of.ts";
import type { Correction, FieldDescription, LeftOut } from "../dataset.ts";
import { Cells, cellNotes } from "./field-cells.ts";
import type { GribEntry, GribIndex } from "./grib-index.ts";
import { type GridAxes, gridAxes } from "./grid-axes.ts";
import { MemberNumbers } from "./member-numbers.ts";
import { type Parameter, parameterOf } from "./parameters.ts";
import { Refusals } from "./refusals.ts";

/** A field of a GRIB file: messages of one parameter, grid and forecast. */
export interface GribField {
  readonly description: FieldDescription;
  readonly axes: GridAxes;
  readonly conversion: Conversion;
  /** Message of a step, level and member; undefined where the file has none. */
  messageAt(step: number, level: number, member: number): GribEntry | undefined;
}

export interface GribFields {
  readonly fields: readonly GribField[];
  readonly leftOut: readonly LeftOut[];
  readonly notes: readonly string[];
}

interface Group {
  readonly parameter: Parameter;
  readonly axes: GridAxes;
  readonly entries: GribEntry[];
  readonly hasMembers: boolean;
}

function groupsOf(index: GribIndex, refusals: Refusals, notes: Set<string>, file: string): Group[] {
  const axes = index.grids.map((definition) => {
    try {
      return gridAxes(definition);
    } catch (error) {
      if (!(error instanceof DataError)) throw error;
      return error.message;
    }
  });
  const alike = new Map<string, { parameter: Parameter; axes: GridAxes; entries: GribEntry[] }>();
  for (const entry of index.entries) {
    const parameter = parameterOf(entry);
    const found = axes[entry.grid];
    if (entry.refusal !== null || entry.pressure === null || found === undefined || typeof found === "string") {
      refusals.add(parameter.variable, entry.refusal ?? (typeof found === "string" ? found : "it has no grid"));
      continue;
    }
    const mark = `${parameter.variable} ${entry.centre} ${entry.grid} ${entry.isEnsembleMean}`;
    const held = alike.get(mark);
    if (held !== undefined) held.entries.push(entry);
    else alike.set(mark, { parameter, axes: found, entries: [entry] });
    if (found.columns.note !== null) notes.add(`${file}: ${found.columns.note}`);
  }
  return [...alike.values()].flatMap(({ entries, ...same }) => {
    const numbers = new MemberNumbers(entries);
    return [false, true].flatMap((hasMembers) => {
      const own = entries.filter((entry) => (numbers.of(entry) !== null) === hasMembers);
      return own.length === 0 ? [] : [{ ...same, entries: own, hasMembers }];
    });
  });
}

/** A name that no other field of the file has: the plain one if it is free, else with what sets it apart from its holder. */
function freeName(group: Group, taken: ReadonlyMap<string, Group>): string {
  const [entry] = group.entries as [GribEntry];
  const plain = `${group.parameter.variable}${entry.isEnsembleMean ? "_ensemble_mean" : ""}`;
  const holder = taken.get(plain);
  if (holder === undefined) return plain;
  const { lat, lon } = group.axes.grid;
  const mark =
    holder.axes !== group.axes
      ? `${lon.length}x${lat.length}`
      : holder.hasMembers !== group.hasMembers
        ? group.hasMembers
          ? "members"
          : "single"
        : `centre_${entry.centre}`;
  let name = `${plain}_${mark}`;
  for (let n = 2; taken.has(name); n++) name = `${plain}_${mark}_${n}`;
  return name;
}

/** What a parameter is taken for, by its code or by what the user said. */
function understood(parameter: Parameter, variable: string, correction: Correction | undefined) {
  const known = recognition(
    {
      name: variable,
      type: "float32",
      dims: [],
      shape: [],
      attributes: {
        units: parameter.units,
        // The four that are recognised are named as the CF conventions name them.
        ...(parameter.quantity === null ? {} : { standard_name: parameter.variable }),
      },
    },
    correction,
  );
  if ("refused" in known) return known;
  const why =
    known.quantity === null
      ? `its GRIB code, ${parameter.code}, is none that is used here`
      : known.why.replace(/^standard name [^;]+/, `GRIB ${parameter.code}`);
  return { ...known, why };
}

/** A forecast, or all analyses of a group. */
interface Run {
  /** Seconds since 1970; null for analyses. */
  readonly start: number | null;
  readonly entries: readonly GribEntry[];
}

/** Starts with a step beyond 0 are forecasts, each of its own; all others are analyses, one record together. */
function runsOf(entries: readonly GribEntry[]): Run[] {
  const byStart = new Map<number, GribEntry[]>();
  for (const entry of entries) {
    const held = byStart.get(entry.start);
    if (held === undefined) byStart.set(entry.start, [entry]);
    else held.push(entry);
  }
  const runs = [...byStart].sort(([a], [b]) => a - b).map(([start, own]) => ({ start, entries: own }));
  const isForecast = (run: Run): boolean => run.entries.some(({ start, valid }) => valid !== start);
  const analyses = runs.filter((run) => !isForecast(run)).flatMap((run) => run.entries);
  return [...(analyses.length === 0 ? [] : [{ start: null, entries: analyses }]), ...runs.filter(isForecast)];
}

/**
 * Put the messages of a file together to fields.
 *
 * @param corrections What the user said about variables of this file.
 */
export function gribFields(index: GribIndex, file: string, corrections: readonly Correction[]): GribFields {
  const refusals = new Refusals();
  const notes = new Set<string>();
  const taken = new Map<string, Group>();
  const fields: GribField[] = [];
  for (const group of groupsOf(index, refusals, notes, file)) {
    const variable = freeName(group, taken);
    taken.set(variable, group);
    const correction = corrections.find((said) => said.file === file && said.variable === variable);
    const known = understood(group.parameter, variable, correction);
    if ("refused" in known) {
      refusals.add(variable, known.refused);
      continue;
    }
    const runs = runsOf(group.entries);
    for (const { start, entries } of runs) {
      const cells = new Cells(entries, group.hasMembers);
      const reference = start === null ? null : start / SECONDS_PER_DAY;
      const suffix = reference === null || runs.length === 1 ? "" : `@${startText(reference, "standard")}`;
      const key = `${file}/${variable}${suffix}`;
      const steps: StepAxis = {
        kind: "time",
        name: "time",
        values: Float64Array.from(cells.steps, (seconds) => seconds / SECONDS_PER_DAY),
        calendar: "standard",
      };
      const mean = entries[0]?.isEnsembleMean === true ? ", ensemble mean" : "";
      fields.push({
        description: {
          key,
          file,
          variable,
          longName: `${group.parameter.longName}${mean}`,
          quantity: known.quantity,
          why: known.why,
          unitsInFile: known.unitsInFile,
          units: known.conversion.units,
          grid: group.axes.grid,
          steps,
          levels: Float64Array.from(cells.levels),
          members: cells.members,
          reference,
          ...(correction?.apart === true ? { apart: true } : {}),
        },
        axes: group.axes,
        conversion: known.conversion,
        messageAt: (step, level, member) => cells.at(step, level, member),
      });
      for (const note of cellNotes(key, cells)) notes.add(note);
    }
  }
  return { fields, leftOut: refusals.list(file), notes: [...notes] };
}
