import { DataError } from "../../core/errors.ts";
import type { ByteSource } from "../../core/formats/byte-source.ts";
import { requireInside } from "../../core/formats/memory-source.ts";
import type { SourceDescription } from "./desk.ts";

function fileSource(file: File): ByteSource {
  return {
    name: file.name,
    size: file.size,
    async read(offset, length) {
      requireInside(file.name, file.size, offset, length);
      try {
        return new Uint8Array(await file.slice(offset, offset + length).arrayBuffer());
      } catch (error) {
        throw new DataError(
          "FormatError",
          `${file.name} can no longer be read: it was changed, moved or taken away since it was opened. Open it again.`,
          error,
        );
      }
    },
  };
}

function rangeSource(name: string, size: number, url: string): ByteSource {
  return {
    name,
    size,
    async read(offset, length) {
      requireInside(name, size, offset, length);
      if (length === 0) return new Uint8Array(0);
      let answer: Response;
      try {
        answer = await fetch(url, { headers: { range: `bytes=${offset}-${offset + length - 1}` } });
      } catch (error) {
        throw new DataError(
          "FormatError",
          `${name} cannot be reached: the program that serves this window has stopped. Start Isohypse again; the case is kept.`,
          error,
        );
      }
      if (answer.status !== 206)
        throw new DataError(
          "FormatError",
          `${name} can no longer be read: ${(await answer.text()).trim()} Open it again.`,
        );
      const bytes = new Uint8Array(await answer.arrayBuffer());
      if (bytes.length !== length)
        throw new DataError(
          "FormatError",
          `${name}: ${bytes.length} of ${length} bytes arrived from byte ${offset}: it became shorter. Open it again once it is whole.`,
        );
      return bytes;
    },
  };
}

/**
 * The bytes behind a description that came from the window.
 *
 * @throws NotFoundError for a path: those are for batch, a window has no disk.
 */
export async function openSource(description: SourceDescription): Promise<ByteSource> {
  switch (description.kind) {
    case "file":
      return fileSource(description.file);
    case "range":
      return rangeSource(description.name, description.size, description.url);
    case "path":
      throw new DataError(
        "NotFoundError",
        `${description.path}: a window cannot open a path by itself. Open the file with the button or by dropping it.`,
      );
  }
}
