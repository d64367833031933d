import type { FileHandle } from "node:fs/promises";
import { join } from "node:path";
import type { Result } from "../../core/recipe/recipe.ts";
import { resultBytes } from "../../core/recipe/result-file.ts";
import { resultTable, tableText } from "../../core/recipe/result-table.ts";
import { wholeFiles } from "./whole-files.ts";

export interface WrittenResult {
  readonly files: readonly string[];
  /** What the table leaves out, in words. */
  readonly notes: readonly string[];
}

async function writeAll(file: FileHandle, pieces: Iterable<Uint8Array | string>): Promise<void> {
  for (const piece of pieces) await file.writeFile(piece);
}

/** Write `<id>.nc` and, where it is short enough, `<id>.csv` into a folder: both or neither. */
export async function writeResult(result: Result, folder: string): Promise<WrittenResult> {
  const { table, note } = resultTable(result);
  const files = await wholeFiles(async (set) => {
    await set.write(join(folder, `${result.id}.nc`), (file) => writeAll(file, resultBytes(result, true)));
    if (table !== null) await set.write(join(folder, `${result.id}.csv`), (file) => writeAll(file, tableText(table)));
  });
  return { files, notes: note === null ? [] : [note] };
}
