import { SECONDS_PER_DAY } from "../../constants.ts";
import { isoText } from "../../field/calendar.ts";
import type { GribEntry } from "./grib-index.ts";
import { MemberNumbers } from "./member-numbers.ts";

/** Messages that are not in the file are named one by one up to this many. */
const MOST_NAMED = 3;

/** Different numbers, increasing. */
function sorted(values: Iterable<number>): number[] {
  return [...new Set(values)].sort((a, b) => a - b);
}

/** Every cell of a field and the message that fills it; the later of two wins. */
export class Cells {
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
      .replace("T", " ");
    return `at ${pressure} hPa, ${time} UTC${member === undefined ? "" : `, member ${member}`}`;
  }
}

/** What a field lacks, and what it has twice, in words. */
export function cellNotes(key: string, cells: Cells): string[] {
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
