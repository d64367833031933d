import type { FileHandle } from "node:fs/promises";
import { join } from "node:path";
import type { Result } from "../../core/recipe/recipe.ts";
import { resultBytes } from "../../core/recipe/result-file.ts";
import { namedTables, resultTable, tableJson, tableText } from "../../core/recipe/result-table.ts";
import { wholeFiles } from "./whole-files.ts";

export interface WrittenResult {
  readonly files: readonly string[];
  /** What the table leaves out, in words. */
  readonly notes: readonly string[];
}

async function writeAll(file: FileHandle, pieces: Iterable<Uint8Array | string>): Promise<void> {
  for (const piece of pieces) await file.writeFile(piece);
}

/** Write `<id>.nc`, where it is short enough `<id>.csv`, and the result's own tables as CSV and JSON: all or none. */
export async function writeResult(result: Result, folder: string): Promise<WrittenResult> {
  const { table, note } = resultTable(result);
  const files = await wholeFiles(async (set) => {
    await set.write(join(folder, `${result.id}.nc`), (file) => writeAll(file, resultBytes(result, true)));
    for (const { name, table: own } of namedTables(result)) {
      await set.write(join(folder, `${result.id}.${name}.csv`), (file) => writeAll(file, tableText(own)));
      await set.write(join(folder, `${result.id}.${name}.json`), (file) => writeAll(file, [tableJson(own)]));
    }
    if (table !== null) await set.write(join(folder, `${result.id}.csv`), (file) => writeAll(file, tableText(table)));
  });
  return { files, notes: note === null ? [] : [note] };
}
