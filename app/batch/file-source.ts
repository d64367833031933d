import { readSync } from "node:fs";
import { type FileHandle, open } from "node:fs/promises";
import { basename } from "node:path";
import { DataError } from "../../core/errors.ts";
import type { ByteSource } from "../../core/formats/byte-source.ts";
import { requireInside } from "../../core/formats/memory-source.ts";

export interface FileSource extends ByteSource {
  close(): Promise<void>;
}

/**
 * A file on disk, read by a handle of its own.
 *
 * @throws NotFoundError in words if `path` cannot be opened or is no file.
 */
export async function openFileSource(path: string): Promise<FileSource> {
  let handle: FileHandle;
  try {
    handle = await open(path, "r");
  } catch (error) {
    const missing = (error as NodeJS.ErrnoException).code === "ENOENT";
    throw new DataError(
      "NotFoundError",
      `${path}: ${missing ? "there is no such file" : `it cannot be read (${(error as Error).message})`}.`,
      error,
    );
  }
  const info = await handle.stat();
  if (!info.isFile()) {
    await handle.close();
    throw new DataError("NotFoundError", `${path}: this is a folder or a device; name a file.`);
  }
  const name = basename(path);
  const shorter = (at: number): DataError =>
    new DataError(
      "FormatError",
      `${name}: it became shorter while it was read (byte ${at}). Open it again once it is whole.`,
    );
  return {
    name,
    size: info.size,
    modified: info.mtimeMs,
    async read(offset, length, into) {
      requireInside(name, info.size, offset, length);
      const bytes = into !== undefined && into.length >= length ? into.subarray(0, length) : new Uint8Array(length);
      let filled = 0;
      while (filled < length) {
        const { bytesRead } = await handle.read(bytes, filled, length - filled, offset + filled);
        if (bytesRead === 0) throw shorter(offset + filled);
        filled += bytesRead;
      }
      return bytes;
    },
    readNow(offset, length) {
      requireInside(name, info.size, offset, length);
      const bytes = new Uint8Array(length);
      let filled = 0;
      while (filled < length) {
        const bytesRead = readSync(handle.fd, bytes, filled, length - filled, offset + filled);
        if (bytesRead === 0) throw shorter(offset + filled);
        filled += bytesRead;
      }
      return bytes;
    },
    close: () => handle.close(),
  };
}
