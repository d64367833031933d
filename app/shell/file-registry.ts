import { randomBytes } from "node:crypto";
import { open, stat } from "node:fs/promises";
import { basename, resolve } from "node:path";
import type { ShellFile } from "./contract.ts";

/** The files that a window may read, each under an address that cannot be guessed. Nothing else on the disk can be asked for. */
export class FileRegistry {
  readonly #paths = new Map<string, string>();
  readonly #ids = new Map<string, string>();
  readonly #prefix: string;

  /** @param prefix What stands before a file's id in its URL, e.g. `/files/`. */
  constructor(prefix: string) {
    this.#prefix = prefix;
  }

  /** Let the window read `path`. @returns null if it is not a readable file. */
  async admit(path: string, keepsPlace = true): Promise<ShellFile | null> {
    const full = resolve(path);
    const info = await stat(full).catch(() => null);
    if (info === null || !info.isFile()) return null;
    let id = this.#ids.get(full);
    if (id === undefined) {
      id = randomBytes(24).toString("base64url");
      this.#ids.set(full, id);
      this.#paths.set(id, full);
    }
    const name = basename(full);
    return {
      name,
      size: info.size,
      url: `${this.#prefix}${id}/${encodeURIComponent(name)}`,
      place: keepsPlace ? full : null,
    };
  }

  pathOf(id: string): string | undefined {
    return this.#paths.get(id);
  }
}

/** Bytes [from, to) of the file at `path`; fewer if it ends before. */
export async function fileRange(path: string, from: number, to: number): Promise<Uint8Array<ArrayBuffer>> {
  const handle = await open(path, "r");
  try {
    const bytes = new Uint8Array(to - from);
    let filled = 0;
    while (filled < bytes.length) {
      const { bytesRead } = await handle.read(bytes, filled, bytes.length - filled, from + filled);
      if (bytesRead === 0) break;
      filled += bytesRead;
    }
    return filled === bytes.length ? bytes : bytes.slice(0, filled);
  } finally {
    await handle.close();
  }
}
