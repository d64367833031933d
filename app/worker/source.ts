import { DataError } from "../../core/errors.ts";
import type { ByteSource } from "../../core/formats/byte-source.ts";
import { requireInside } from "../../core/formats/memory-source.ts";
import type { SourceDescription } from "./desk.ts";

function fileSource(file: File): ByteSource {
  const gone = (error: unknown): DataError =>
    new DataError(
      "FormatError",
      `${file.name} can no longer be read: it was changed, moved or taken away since it was opened. Open it again.`,
      error,
    );
  return {
    name: file.name,
    size: file.size,
    modified: file.lastModified,
    async read(offset, length) {
      requireInside(file.name, file.size, offset, length);
      try {
        return new Uint8Array(await file.slice(offset, offset + length).arrayBuffer());
      } catch (error) {
        throw gone(error);
      }
    },
    readNow(offset, length) {
      requireInside(file.name, file.size, offset, length);
      try {
        return new Uint8Array(new FileReaderSync().readAsArrayBuffer(file.slice(offset, offset + length)));
      } catch (error) {
        throw gone(error);
      }
    },
  };
}

function rangeSource(name: string, size: number, url: string): ByteSource {
  const unreachable = (error: unknown): DataError =>
    new DataError(
      "FormatError",
      `${name} cannot be reached: the program that serves this window has stopped. Start Isohypse again; the case is kept.`,
      error,
    );
  const refused = (words: string): DataError =>
    new DataError("FormatError", `${name} can no longer be read: ${words.trim()} Open it again.`);
  const range = (offset: number, length: number): string => `bytes=${offset}-${offset + length - 1}`;
  const whole = (bytes: Uint8Array<ArrayBuffer>, offset: number, length: number): Uint8Array<ArrayBuffer> => {
    if (bytes.length !== length)
      throw new DataError(
        "FormatError",
        `${name}: ${bytes.length} of ${length} bytes arrived from byte ${offset}: it became shorter. Open it again once it is whole.`,
      );
    return bytes;
  };
  return {
    name,
    size,
    async read(offset, length) {
      requireInside(name, size, offset, length);
      if (length === 0) return new Uint8Array(0);
      let answer: Response;
      try {
        answer = await fetch(url, { headers: { range: range(offset, length) } });
      } catch (error) {
        throw unreachable(error);
      }
      if (answer.status !== 206) throw refused(await answer.text());
      return whole(new Uint8Array(await answer.arrayBuffer()), offset, length);
    },
    readNow(offset, length) {
      requireInside(name, size, offset, length);
      if (length === 0) return new Uint8Array(0);
      const request = new XMLHttpRequest();
      request.open("GET", url, false);
      request.responseType = "arraybuffer";
      request.setRequestHeader("range", range(offset, length));
      try {
        request.send();
      } catch (error) {
        throw unreachable(error);
      }
      const answer = new Uint8Array(request.response as ArrayBuffer);
      if (request.status !== 206) throw refused(new TextDecoder().decode(answer));
      return whole(answer, offset, length);
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
