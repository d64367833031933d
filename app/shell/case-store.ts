import { mkdir, readFile, rename, rm, writeFile } from "node:fs/promises";
import { homedir } from "node:os";
import { join } from "node:path";

const MOST_BYTES = 16 * 1024 * 1024;

/** Folder where this user's state is kept: where ISOHYPSE_STATE says, else where the system keeps such things. */
export function stateFolder(environment: Readonly<Record<string, string | undefined>>, platform: string): string {
  if (environment.ISOHYPSE_STATE) return environment.ISOHYPSE_STATE;
  const home = environment.HOME ?? homedir();
  if (platform === "win32") return join(environment.LOCALAPPDATA ?? join(home, "AppData", "Local"), "Isohypse");
  if (platform === "darwin") return join(home, "Library", "Application Support", "Isohypse");
  return join(environment.XDG_STATE_HOME ?? join(home, ".local", "state"), "isohypse");
}

/** The autosaved case: one file, replaced whole, so that a crash leaves either the old text or the new. */
export class CaseStore {
  readonly #folder: string;
  /** Writes follow one another: two at once would share the temporary name. */
  #last: Promise<void> = Promise.resolve();

  constructor(folder: string) {
    this.#folder = folder;
  }

  get path(): string {
    return join(this.#folder, "autosave.json");
  }

  async read(): Promise<string | null> {
    return readFile(this.path, "utf8").catch(() => null);
  }

  /** @throws Error in words if the text is too large or the folder cannot be written. */
  write(text: string): Promise<void> {
    if (Buffer.byteLength(text) > MOST_BYTES)
      return Promise.reject(new Error("The case is too large to be kept: over 16 MB."));
    const next = this.#last.then(() => this.#replace(text));
    this.#last = next.catch(() => undefined);
    return next;
  }

  async #replace(text: string): Promise<void> {
    const temporary = `${this.path}.${process.pid}.new`;
    await mkdir(this.#folder, { recursive: true });
    try {
      await writeFile(temporary, text, { flush: true });
      await rename(temporary, this.path);
    } catch (error) {
      await rm(temporary, { force: true });
      throw error;
    }
  }
}
