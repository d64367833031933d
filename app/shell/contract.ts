/**
 * The one contract between the window and the shell that holds it. Electron's main process and the local host both
 * implement it; the window knows nothing else of either.
 */

/** A file that the shell can serve by ranges at `url`; `place` lets the case find it again after a restart. */
export interface ShellFile {
  readonly name: string;
  readonly size: number;
  readonly url: string;
  /** Absolute path on this machine; null for the bundled sample. */
  readonly place: string | null;
}

export interface LaunchState {
  readonly version: string;
  readonly shell: "electron" | "local";
  /** Files to open at the start: those named on the command line, else the sample case's. */
  readonly files: readonly ShellFile[];
  /** Files that could not be found, in words. */
  readonly missing: readonly string[];
  /** True if `files` is the bundled sample. */
  readonly sample: boolean;
  /** The autosaved case, as text, if there is one; the window decides what to do with it. */
  readonly autosave: string | null;
}

export interface Shell {
  launch(): Promise<LaunchState>;
  /** The bundled sample case's files. */
  sampleFiles(): Promise<readonly ShellFile[]>;
  /** Electron only: the system's dialog; null where the window must use its own file input. */
  chooseFiles(): Promise<readonly ShellFile[] | null>;
  /** Files of a saved case by their places; those that are gone, or that this user never opened here, are left out. */
  filesAt(places: readonly string[]): Promise<readonly ShellFile[]>;
  /** Keep the case as the autosave; written whole or not at all. */
  autosave(text: string): Promise<void>;
}

/** One entry per function of Shell: channel names for Electron, paths for the local host. */
export const SHELL_CALLS = [
  "launch",
  "sampleFiles",
  "chooseFiles",
  "filesAt",
  "autosave",
] as const satisfies readonly (keyof Shell)[];
