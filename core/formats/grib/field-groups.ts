import { DataError } from "../../errors.ts";
import type { StepAxis } from "../../field/axes.ts";
import { isoText } from "../../field/calendar.ts";
import type { Conversion } from "../../units/units.ts";
import { startText } from "../cf/forecast-steps.ts";
import { recognition } from "../cf/quantity-of.ts";
import type { Correction, FieldDescription, LeftOut } from "../dataset.ts";
import type { GribEntry, GribIndex } from "./grib-index.ts";
import { type GridAxes, gridAxes } from "./grid-axes.ts";
import { MemberNumbers } from "./member-numbers.ts";
import { type Parameter, parameterOf } from "./parameters.ts";

const SECONDS_PER_DAY = 86_400;
/** Messages that are not in the file are named one by one up to this many. */
const MOST_NAMED = 3;
/** Reasons told for one variable. */
const MOST_REASONS = 8;

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

/** Refusals by variable and reason, in the order in which they are met. */
class Refusals {
  readonly #counts = new Map<string, Map<string, number>>();

  add(variable: string, why: string): void {
    const reasons = this.#counts.get(variable) ?? new Map<string, number>();
    this.#counts.set(variable, reasons);
    reasons.set(why, (reasons.get(why) ?? 0) + 1);
  }

  list(file: string): LeftOut[] {
    return [...this.#counts].flatMap(([variable, reasons]) => {
      const all = [...reasons].map(([why, n]) => ({ file, variable, why: n === 1 ? why : `${why} (${n} messages)` }));
      const rest = all.length - MOST_REASONS;
      return rest <= 0
        ? all
        : [...all.slice(0, MOST_REASONS), { file, variable, why: `${rest} more reasons like these` }];
    });
  }
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

/** A name that no other field of the file has, the plain one if it is free. */
function freeName(group: Group, taken: ReadonlySet<string>): string {
  const [entry] = group.entries as [GribEntry];
  const plain = `${group.parameter.variable}${entry.isEnsembleMean ? "_ensemble_mean" : ""}`;
  const { lat, lon } = group.axes.grid;
  const sized = `${plain}_${lon.length}x${lat.length}`;
  const choices = [
    plain,
    ...(group.hasMembers ? [`${plain}_members`] : []),
    sized,
    `${plain}_centre_${entry.centre}`,
    `${sized}_centre_${entry.centre}`,
  ];
  for (let n = 2; ; n++) {
    const free = choices.find((choice) => !taken.has(choice));
    if (free !== undefined) return free;
    choices.push(`${sized}_${n}`);
  }
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

function sorted(values: Iterable<number>): number[] {
  return [...new Set(values)].sort((a, b) => a - b);
}

/** A forecast, or all analyses of a group. */
interface Run {
  /** Seconds since 1970; null for analyses. */
  readonly start: number | null;
  readonly entries: readonly GribEntry[];
}

/** Starts with a step beyond 0 are forecasts, each of its own; all others are analyses, one record together. */
function runsOf(entries: readonly GribEntry[]): Run[] {
  const starts = new Set(entries.filter(({ start, valid }) => valid !== start).map(({ start }) => start));
  const analyses = entries.filter(({ start }) => !starts.has(start));
  return [
    ...(analyses.length === 0 ? [] : [{ start: null, entries: analyses }]),
    ...sorted(starts).map((start) => ({ start, entries: entries.filter((entry) => entry.start === start) })),
  ];
}

/** Every cell of a field and the message that fills it; the later of two wins. */
class Cells {
  readonly steps: readonly number[];
  readonly levels: readonly number[];
  readonly members: readonly number[] | null;
  readonly #held = new Map<string, GribEntry>();
  /** Messages that another one took the place of. */
  readonly doubles: GribEntry[] = [];

  constructor(entries: readonly GribEntry[], hasMembers: boolean) {
    const numbers = new MemberNumbers(entries);
    this.steps = sorted(entries.map(({ valid }) => valid));
    this.levels = sorted(entries.map(({ pressure }) => pressure as number)).reverse();
    this.members = hasMembers ? sorted(entries.map((entry) => numbers.of(entry) ?? 0)) : null;
    for (const entry of entries) {
      const mark = this.#mark(entry.valid, entry.pressure as number, hasMembers ? (numbers.of(entry) ?? 0) : 0);
      const before = this.#held.get(mark);
      if (before !== undefined) this.doubles.push(before);
      this.#held.set(mark, entry);
    }
  }

  #mark(valid: number, pressure: number, member: number): string {
    return `${valid} ${pressure} ${member}`;
  }

  at(step: number, level: number, member: number): GribEntry | undefined {
    const number = this.members === null ? 0 : (this.members[member] as number);
    return this.#held.get(this.#mark(this.steps[step] as number, this.levels[level] as number, number));
  }

  get missing(): number {
    return this.steps.length * this.levels.length * (this.members?.length ?? 1) - this.#held.size;
  }

  /** The first cells without a message, in words. */
  missingWords(most: number): string[] {
    const words: string[] = [];
    for (let t = 0; t < this.steps.length; t++)
      for (let l = 0; l < this.levels.length; l++)
        for (let m = 0; m < (this.members?.length ?? 1); m++) {
          if (words.length === most) return words;
          if (this.at(t, l, m) === undefined) words.push(this.words(this.steps[t], this.levels[l], this.members?.[m]));
        }
    return words;
  }

  words(valid: number | undefined, pressure: number | null | undefined, member: number | undefined): string {
    const time = isoText((valid ?? 0) / SECONDS_PER_DAY, "standard")
      .replace(/(:00)?:00Z$/, "")
      .replace("T", ", ");
    return `at ${pressure} hPa, ${time} UTC${member === undefined ? "" : `, member ${member}`}`;
  }
}

function cellNotes(key: string, cells: Cells): string[] {
  const notes: string[] = [];
  const { missing, doubles } = cells;
  if (missing > 0) {
    const words = cells.missingWords(MOST_NAMED);
    const more = missing > words.length ? ` and ${missing - words.length} more` : "";
    notes.push(
      `${key} ${words.join("; ")}${more} ${missing === 1 ? "is" : "are"} not in the file and ${missing === 1 ? "reads" : "read"} as missing.`,
    );
  }
  if (doubles.length > 0) {
    const [first] = doubles as [GribEntry];
    const where = cells.words(first.valid, first.pressure, cells.members === null ? undefined : first.member?.number);
    notes.push(
      doubles.length === 1
        ? `${key} ${where} is in the file twice; the later message is used.`
        : `${key}: ${doubles.length} messages are in the file again, ${where} the first of them; the latest of each is used.`,
    );
  }
  return notes;
}

/**
 * Put the messages of a file together to fields.
 *
 * @param corrections What the user said about variables of this file.
 */
export function gribFields(index: GribIndex, file: string, corrections: readonly Correction[]): GribFields {
  const refusals = new Refusals();
  const notes = new Set<string>();
  const taken = new Set<string>();
  const fields: GribField[] = [];
  for (const group of groupsOf(index, refusals, notes, file)) {
    const variable = freeName(group, taken);
    taken.add(variable);
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
