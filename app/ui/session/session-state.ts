import type { FileContents } from "../../../core/formats/dataset.ts";
import type { TaskProgress } from "../../worker/desk.ts";
import { type Case, type CaseFile, emptyCase } from "../case/case.ts";

/** Something the user should know: an error with a file, or a repair. Stays until it is dismissed. */
export interface Notice {
  readonly id: number;
  readonly kind: "error" | "note";
  /** What is wrong, in bold. */
  readonly title: string;
  /** Where, and what to do. */
  readonly words: string;
}

/** What the window knows beside the case; nothing of it is saved. */
export interface SessionState {
  /** Until the shell has said what to open. */
  readonly isStarting: boolean;
  readonly kept: Case;
  readonly contents: readonly FileContents[];
  /** Files of the case that must be chosen again. */
  readonly awaited: readonly CaseFile[];
  readonly notices: readonly Notice[];
  readonly tasks: readonly TaskProgress[];
  /** Names of files that are being opened. */
  readonly opening: readonly string[];
  readonly isSample: boolean;
  readonly savedAt: Date | null;
  readonly version: string;
}

export function startingState(): SessionState {
  return {
    isStarting: true,
    kept: emptyCase(),
    contents: [],
    awaited: [],
    notices: [],
    tasks: [],
    opening: [],
    isSample: false,
    savedAt: null,
    version: "",
  };
}

/** Tasks under way after one more report; a task at 1 is over. */
export function withProgress(tasks: readonly TaskProgress[], report: TaskProgress): readonly TaskProgress[] {
  const others = tasks.filter(({ task }) => task !== report.task);
  return report.done >= 1 ? others : [...others, report];
}

/** Files of the case with some added; one of the same name takes the earlier one's place, in the list too. */
export function withFiles(files: readonly CaseFile[], added: readonly CaseFile[]): readonly CaseFile[] {
  const replaced = files.map((file) => added.find(({ name }) => name === file.name) ?? file);
  const known = new Set(files.map(({ name }) => name));
  return [...replaced, ...added.filter(({ name }) => !known.has(name))];
}

/** The awaited files that are still missing once `come` are there. */
export function stillAwaited(awaited: readonly CaseFile[], come: readonly CaseFile[]): readonly CaseFile[] {
  const names = new Set(come.map(({ name }) => name));
  return awaited.filter(({ name }) => !names.has(name));
}
