import type { Correction, FileContents } from "../../../core/formats/dataset.ts";
import type { Shell, ShellFile } from "../../shell/contract.ts";
import type { Desk, SourceDescription, TaskProgress } from "../../worker/desk.ts";
import { withCorrection } from "../case/actions.ts";
import { type Case, type CaseFile, emptyCase } from "../case/case.ts";
import { caseOfText, caseText } from "../case/case-text.ts";
import { settledCase, usableFields } from "../case/settled-case.ts";
import {
  type Notice,
  type SessionState,
  startingState,
  stillAwaited,
  withFiles,
  withProgress,
} from "./session-state.ts";

const AUTOSAVE_AFTER = 600; // milliseconds of rest; a drag through time writes once
const CASE_BYTES = 4 * 1024 * 1024; // a larger .json is no case

/** A file to open, and how the desk reads it. */
export interface Opening {
  readonly entry: CaseFile;
  readonly source: SourceDescription;
}

function openingOfFile(file: File): Opening {
  return { entry: { name: file.name, size: file.size, place: null }, source: { kind: "file", file } };
}

function openingOfShellFile({ name, size, url, place }: ShellFile): Opening {
  return { entry: { name, size, place }, source: { kind: "range", name, size, url } };
}

function words(error: unknown): string {
  return error instanceof Error ? error.message : String(error);
}

function titleOf(files: readonly CaseFile[], isSample: boolean): string {
  if (isSample) return "Invented winter";
  return files[0]?.name.replace(/\.[A-Za-z0-9]{1,5}$/, "") ?? "Untitled";
}

/** The open case and what is known of its files: the one store of the window. */
export class Session {
  readonly desk: Desk;
  readonly #shell: Shell;
  readonly #now: () => Date;
  #state: SessionState = startingState();
  readonly #listeners = new Set<() => void>();
  #counter = 0;
  #timer: ReturnType<typeof setTimeout> | null = null;
  #autosaved = "";
  #started = false;

  constructor(desk: Desk, shell: Shell, now: () => Date = () => new Date()) {
    this.desk = desk;
    this.#shell = shell;
    this.#now = now;
  }

  readonly subscribe = (listener: () => void): (() => void) => {
    this.#listeners.add(listener);
    return () => this.#listeners.delete(listener);
  };

  readonly state = (): SessionState => this.#state;

  /** A number for a new task of the desk. */
  newTask(): number {
    this.#counter += 1;
    return this.#counter;
  }

  /** Do something to the case: `action` gives the next one. */
  act(action: (kept: Case) => Case): void {
    const kept = this.#settled(action(this.#state.kept));
    if (kept !== this.#state.kept) this.#set({ kept });
  }

  /** What to open at the start: files named to the shell, else the case of last time, else the sample. Runs once. */
  async start(): Promise<void> {
    if (this.#started) return;
    this.#started = true;
    try {
      await this.desk.onProgress((report: TaskProgress) =>
        this.#set({ tasks: withProgress(this.#state.tasks, report) }),
      );
      const launch = await this.#shell.launch();
      this.#set({ version: launch.version });
      for (const missing of launch.missing) this.#notify("error", "A file was not found.", missing);
      const isRestored = launch.sample && launch.autosave !== null && (await this.#restoreAutosave(launch.autosave));
      if (!isRestored && launch.files.length > 0)
        await this.#openAll(launch.files.map(openingOfShellFile), launch.sample);
    } catch (error) {
      this.#notify("error", "The window could not be started in full.", words(error));
    }
    this.#set({ isStarting: false });
  }

  /** Data files, and cases, from the file input or a drop. */
  async openFiles(files: readonly File[]): Promise<void> {
    const data: File[] = [];
    for (const file of files) {
      if (/\.json$/i.test(file.name)) await this.#openCaseFile(file);
      else data.push(file);
    }
    if (data.length > 0) await this.#openAll(data.map(openingOfFile), false);
  }

  /** The shell's own dialog. @returns false where there is none, and the file input must serve. */
  async chooseFiles(): Promise<boolean> {
    try {
      const files = await this.#shell.chooseFiles();
      if (files === null) return false;
      if (files.length > 0) await this.#openAll(files.map(openingOfShellFile), false);
      return true;
    } catch (error) {
      this.#notify("error", "No file was opened.", words(error));
      return true;
    }
  }

  async openSample(): Promise<void> {
    try {
      await this.#openAll((await this.#shell.sampleFiles()).map(openingOfShellFile), true);
    } catch (error) {
      this.#notify("error", "The sample case was not opened.", words(error));
    }
  }

  /** Say what a variable is, and read its file anew. */
  async correct(correction: Correction): Promise<void> {
    const kept = withCorrection(this.#state.kept, correction);
    try {
      const contents = await this.desk.correct(correction.file, kept.corrections);
      this.#set({
        contents: this.#state.contents.map((file) => (file.file === contents.file ? contents : file)),
      });
      this.act((current) => ({ ...current, corrections: kept.corrections }));
    } catch (error) {
      this.#notify("error", `${correction.variable} of ${correction.file} stays as it was.`, words(error));
    }
  }

  async closeFile(name: string): Promise<void> {
    await this.desk.close(name).catch(() => undefined);
    this.#set({
      contents: this.#state.contents.filter(({ file }) => file !== name),
      awaited: this.#state.awaited.filter((file) => file.name !== name),
    });
    this.act((kept) => ({ ...kept, files: kept.files.filter((file) => file.name !== name) }));
  }

  dismiss(id: number): void {
    this.#set({ notices: this.#state.notices.filter((notice) => notice.id !== id) });
  }

  report(title: string, said: string): void {
    this.#notify("error", title, said);
  }

  async cancel(task: number): Promise<void> {
    await this.desk.cancel(task).catch(() => undefined);
  }

  /** Keep the case now, whatever the debounce says: the page is about to go. */
  async flush(): Promise<void> {
    if (this.#timer !== null) clearTimeout(this.#timer);
    this.#timer = null;
    const text = caseText(this.#state.kept);
    if (this.#state.isStarting || this.#state.kept.files.length === 0 || text === this.#autosaved) return;
    try {
      await this.#shell.autosave(text);
      this.#autosaved = text;
      this.#set({ savedAt: this.#now() }, false);
    } catch (error) {
      const title = "The case could not be kept.";
      if (!this.#state.notices.some((notice) => notice.title === title)) this.#notify("error", title, words(error));
    }
  }

  async #openCaseFile(file: File): Promise<void> {
    try {
      if (file.size > CASE_BYTES) throw new Error(`${file.name} is no case: it has ${file.size} bytes.`);
      await this.#restore(caseOfText(await file.text(), file.name));
    } catch (error) {
      this.#notify("error", `${file.name} was not opened.`, words(error));
    }
  }

  async #restoreAutosave(text: string): Promise<boolean> {
    try {
      await this.#restore(caseOfText(text, "The case of last time"));
      this.#autosaved = text;
      return true;
    } catch (error) {
      this.#notify("error", "The case of last time could not be opened again.", words(error));
      return false;
    }
  }

  /** Take a saved case: files that are open or can be found are used, the others are asked for. */
  async #restore(saved: Case): Promise<void> {
    const isHeld = (file: CaseFile): boolean =>
      this.#state.kept.files.some(({ name, size }) => name === file.name && size === file.size) &&
      this.#state.contents.some((contents) => contents.file === file.name);
    const held = saved.files.filter(isHeld);
    const wanted = saved.files.filter((file) => !isHeld(file));
    const places = wanted.flatMap(({ place }) => (place === null ? [] : [place]));
    const found = places.length > 0 ? await this.#shell.filesAt(places) : [];
    const sample = wanted.some(({ place }) => place === null) ? await this.#shell.sampleFiles() : [];
    const openings = [...found, ...sample]
      .map(openingOfShellFile)
      .filter(({ entry }) =>
        wanted.some(
          ({ name, size, place }) => name === entry.name && (place ?? null) === entry.place && size === entry.size,
        ),
      );
    for (const { file } of this.#state.contents)
      if (!held.some(({ name }) => name === file)) await this.desk.close(file).catch(() => undefined);
    this.#set({
      kept: saved,
      contents: this.#state.contents.filter(({ file }) => held.some(({ name }) => name === file)),
      awaited: stillAwaited(
        wanted,
        openings.map(({ entry }) => entry),
      ),
      isSample: saved.files.length > 0 && saved.files.every(({ name }) => sample.some((file) => file.name === name)),
    });
    if (openings.length > 0) await this.#openAll(openings, this.#state.isSample);
    else this.act((kept) => kept);
  }

  /** Open data files. Files that are refused are told of; the case stays with what is open. */
  async #openAll(openings: readonly Opening[], isSample: boolean): Promise<void> {
    this.#set({ opening: [...this.#state.opening, ...openings.map(({ entry }) => entry.name)] });
    const opened: FileContents[] = [];
    const entries: CaseFile[] = [];
    for (const { entry, source } of openings) {
      try {
        const report = await this.desk.open([source], this.#state.kept.corrections);
        for (const { file, words: said } of report.refused) this.#notify("error", `${file} was not opened.`, said);
        opened.push(...report.opened);
        if (report.opened.length > 0) entries.push(entry);
      } catch (error) {
        this.#notify("error", `${entry.name} was not opened.`, words(error));
      }
    }
    const names = openings.map(({ entry }) => entry.name);
    this.#set({ opening: this.#state.opening.filter((name) => !names.includes(name)) });
    if (opened.length > 0) await this.#take(opened, entries, isSample);
  }

  async #take(opened: readonly FileContents[], entries: readonly CaseFile[], isSample: boolean): Promise<void> {
    const before = this.#state;
    const isAwaited = (entry: CaseFile): boolean => before.awaited.some(({ name }) => name === entry.name);
    const isReturn = entries.some(
      (entry) => isAwaited(entry) || before.kept.files.some(({ name }) => name === entry.name),
    );
    // The sample makes way for the user's own files; so do the settings that belonged to it.
    const isFresh = !isReturn && (before.isSample || before.kept.files.length === 0);
    if (isFresh)
      for (const { file } of before.contents)
        if (!opened.some((contents) => contents.file === file)) await this.desk.close(file).catch(() => undefined);
    const stay = isFresh
      ? []
      : before.contents.filter(({ file }) => !opened.some((contents) => contents.file === file));
    const contents = [...stay, ...opened];
    for (const entry of entries) {
      const expected = before.awaited.find(({ name }) => name === entry.name);
      if (expected !== undefined && expected.size !== entry.size)
        this.#notify(
          "note",
          `${entry.name} is not the very file of the case.`,
          `It has ${entry.size} bytes; the case was made with ${expected.size}.`,
        );
    }
    const base: Case = isFresh ? { ...emptyCase(before.kept.theme), title: titleOf(entries, isSample) } : before.kept;
    const files = withFiles(base.files, entries);
    const [first] = usableFields(opened);
    const chosen = isReturn || isFresh || first === undefined ? base.field : null;
    this.#set({
      contents,
      awaited: stillAwaited(before.awaited, entries),
      isSample: isFresh ? isSample : before.isSample && isReturn,
    });
    const next = { ...base, files, field: chosen };
    // A further file shows itself: its own best field is chosen, with the case's settings kept where they fit.
    if (chosen === null && !isFresh) {
      const own = settledCase({ ...next, field: null }, opened);
      this.act(() => ({ ...next, field: own.field, level: own.level }));
    } else this.act(() => next);
  }

  #settled(kept: Case): Case {
    const { contents, awaited } = this.#state;
    // While a file is awaited, the choices that belong to it must not be settled away.
    return contents.length === 0 || awaited.length > 0 ? kept : settledCase(kept, contents);
  }

  #notify(kind: Notice["kind"], title: string, said: string): void {
    this.#counter += 1;
    this.#set({ notices: [...this.#state.notices, { id: this.#counter, kind, title, words: said }] });
  }

  #set(change: Partial<SessionState>, autosaves = true): void {
    this.#state = { ...this.#state, ...change };
    for (const listener of this.#listeners) listener();
    if (!autosaves || change.kept === undefined) return;
    if (this.#timer !== null) clearTimeout(this.#timer);
    this.#timer = setTimeout(() => void this.flush(), AUTOSAVE_AFTER);
  }
}
