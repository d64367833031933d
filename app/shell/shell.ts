import { join, resolve } from "node:path";
import type { CaseStore } from "./case-store.ts";
import { type LaunchState, SHELL_CALLS, type Shell, type ShellFile } from "./contract.ts";
import type { FileRegistry } from "./file-registry.ts";
import type { KnownPlaces } from "./known-places.ts";

export interface ShellParts {
  readonly kind: LaunchState["shell"];
  readonly version: string;
  /** Files named on the command line. */
  readonly named: readonly string[];
  readonly sampleFolder: string;
  readonly registry: FileRegistry;
  readonly store: CaseStore;
  readonly places: KnownPlaces;
  /** The system's open dialog; null where there is none. */
  readonly dialog: (() => Promise<readonly string[]>) | null;
}

const SAMPLE_FILE = "invented-winter.nc";

/** The shell's functions, the same under Electron and on the local host. */
export function createShell(parts: ShellParts): Shell {
  const { registry, store, places } = parts;
  const admitted = async (paths: readonly string[]): Promise<ShellFile[]> => {
    const files = await Promise.all(paths.map((path) => registry.admit(path)));
    return files.filter((file) => file !== null);
  };
  const sampleFiles = async (): Promise<ShellFile[]> => {
    const file = await registry.admit(join(parts.sampleFolder, SAMPLE_FILE), false);
    return file === null ? [] : [file];
  };
  return {
    async launch() {
      const named = await Promise.all(parts.named.map(async (path) => ({ path, file: await registry.admit(path) })));
      const missing = named
        .filter(({ file }) => file === null)
        .map(({ path }) => `${resolve(path)}: no such file, or it cannot be read.`);
      const files = named.flatMap(({ file }) => (file === null ? [] : [file]));
      await places.add(files.flatMap((file) => file.place ?? []));
      const sample = parts.named.length === 0;
      return {
        version: parts.version,
        shell: parts.kind,
        files: sample ? await sampleFiles() : files,
        missing,
        sample,
        autosave: await store.read(),
      };
    },
    sampleFiles,
    async chooseFiles() {
      if (parts.dialog === null) return null;
      const files = await admitted(await parts.dialog());
      await places.add(files.flatMap((file) => file.place ?? []));
      return files;
    },
    async filesAt(wanted) {
      const known = await Promise.all(wanted.map((place) => places.has(place)));
      return admitted(wanted.filter((_, i) => known[i]));
    },
    autosave: (text) => store.write(text),
  };
}

/**
 * One call from a window, with everything that came over the wire checked.
 *
 * @throws Error in words for a call or an argument that the contract does not know.
 */
export async function answerShellCall(shell: Shell, call: string, args: readonly unknown[]): Promise<unknown> {
  if (!(SHELL_CALLS as readonly string[]).includes(call))
    throw new Error(`The shell has no call named ${JSON.stringify(call)}.`);
  const [first] = args;
  switch (call as keyof Shell) {
    case "autosave":
      if (args.length !== 1 || typeof first !== "string") throw new Error("autosave takes one text.");
      return shell.autosave(first);
    case "filesAt":
      if (args.length !== 1 || !Array.isArray(first) || !first.every((place) => typeof place === "string"))
        throw new Error("filesAt takes one list of paths.");
      return shell.filesAt(first);
    default:
      if (args.length !== 0) throw new Error(`${call} takes no arguments.`);
      return shell[call as "launch" | "sampleFiles" | "chooseFiles"]();
  }
}
