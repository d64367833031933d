import type { OpenFile } from "../../core/formats/dataset.ts";
import { openFile } from "../../core/formats/open-file.ts";
import { LIBRARIES } from "../codecs/libraries.ts";
import { openFileSource } from "./file-source.ts";
import { cacheFolder, IndexFolder } from "./index-folder.ts";
import type { BatchFile } from "./thread-crew.ts";

const keeper = new IndexFolder(cacheFolder(process.env, process.platform));

/** @throws DataError in words naming the file. */
export async function openBatchFile({ path, corrections }: BatchFile): Promise<OpenFile> {
  const source = await openFileSource(path);
  try {
    const file = await openFile(source, LIBRARIES, corrections, { keeper });
    return {
      contents: file.contents,
      read: (key, request) => file.read(key, request),
      async close() {
        await file.close();
        await source.close();
      },
    };
  } catch (error) {
    await source.close();
    throw error;
  }
}
