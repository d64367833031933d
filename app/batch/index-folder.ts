import { createHash } from "node:crypto";
import { mkdir, readdir, readFile, rename, rm, stat, writeFile } from "node:fs/promises";
import { homedir } from "node:os";
import { join } from "node:path";
import type { ByteSource } from "../../core/formats/byte-source.ts";
import type { IndexKeeper } from "../../core/formats/libraries.ts";

/** A smaller file is scanned again sooner than its index is found. */
const WORTH_KEEPING = 16 << 20;
const MOST_KEPT = 64; // indices; the oldest go first

/** Folder of what can be made anew at any time: where ISOHYPSE_CACHE says, else where the system keeps such things. */
export function cacheFolder(environment: Readonly<Record<string, string | undefined>>, platform: string): string {
  if (environment.ISOHYPSE_CACHE) return environment.ISOHYPSE_CACHE;
  const home = environment.HOME ?? homedir();
  if (platform === "win32")
    return join(environment.LOCALAPPDATA ?? join(home, "AppData", "Local"), "Isohypse", "Cache");
  if (platform === "darwin") return join(home, "Library", "Caches", "Isohypse");
  return join(environment.XDG_CACHE_HOME ?? join(home, ".cache"), "isohypse");
}

/** Indices of large files in a folder, one JSON file each, named by the file's name, size and time of change. */
export class IndexFolder implements IndexKeeper {
  readonly #folder: string;
  readonly #least: number;

  constructor(folder: string, least = WORTH_KEEPING) {
    this.#folder = folder;
    this.#least = least;
  }

  #path({ name, size, modified }: ByteSource): string | null {
    if (modified === undefined || size < this.#least) return null;
    const mark = createHash("sha256")
      .update(JSON.stringify([name, size, modified]))
      .digest("hex");
    return join(this.#folder, `index-${mark.slice(0, 32)}.json`);
  }

  async held(source: ByteSource): Promise<unknown> {
    const path = this.#path(source);
    if (path === null) return null;
    try {
      return JSON.parse(await readFile(path, "utf8"));
    } catch {
      return null;
    }
  }

  async keep(source: ByteSource, index: unknown): Promise<void> {
    const path = this.#path(source);
    if (path === null) return;
    const temporary = `${path}.${process.pid}-${Math.random().toString(36).slice(2)}`;
    try {
      await mkdir(this.#folder, { recursive: true });
      await writeFile(temporary, JSON.stringify(index));
      await rename(temporary, path);
      await this.#forgetOldest();
    } catch {
      // A full disk or a folder that cannot be written: the file is scanned again next time.
      await rm(temporary, { force: true }).catch(() => undefined);
    }
  }

  async #forgetOldest(): Promise<void> {
    const names = (await readdir(this.#folder)).filter((name) => /^index-[0-9a-f]{32}\.json$/.test(name));
    if (names.length <= MOST_KEPT) return;
    const aged = await Promise.all(
      names.map(async (name) => ({ name, time: (await stat(join(this.#folder, name))).mtimeMs })),
    );
    aged.sort((a, b) => a.time - b.time);
    for (const { name } of aged.slice(0, aged.length - MOST_KEPT)) await rm(join(this.#folder, name), { force: true });
  }
}
