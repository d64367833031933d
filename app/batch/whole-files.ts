import { type FileHandle, open, rename, rm } from "node:fs/promises";

/** Files that appear under their names together, whole, or not at all. */
export class WholeFiles {
  readonly #written: { readonly temporary: string; readonly path: string }[] = [];

  /** Write `path` under a temporary name beside it. */
  async write(path: string, fill: (file: FileHandle) => Promise<void>): Promise<void> {
    const temporary = `${path}.${process.pid}.part`;
    this.#written.push({ temporary, path });
    const file = await open(temporary, "w");
    try {
      await fill(file);
      // On the disk before the name is: a power cut must not leave a name on an empty file.
      await file.sync();
    } finally {
      await file.close();
    }
  }

  /** Give every file its name. */
  async finish(): Promise<string[]> {
    for (const { temporary, path } of this.#written) await rename(temporary, path);
    return this.#written.splice(0).map(({ path }) => path);
  }

  /** Remove whatever was begun. */
  async drop(): Promise<void> {
    for (const { temporary } of this.#written.splice(0)) await rm(temporary, { force: true });
  }
}

/** Run `fill` on a set of files; if it throws, none of them is left. */
export async function wholeFiles(fill: (files: WholeFiles) => Promise<void>): Promise<string[]> {
  const files = new WholeFiles();
  try {
    await fill(files);
    return await files.finish();
  } catch (error) {
    await files.drop();
    throw error;
  }
}
