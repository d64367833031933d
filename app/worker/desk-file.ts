import type { OpenFile } from "../../core/formats/dataset.ts";
import { type OpenHooks, openFile } from "../../core/formats/open-file.ts";
import { LIBRARIES } from "../codecs/libraries.ts";
import type { DeskFile } from "./desk-service.ts";
import { openSource } from "./source.ts";

/** @throws DataError in words naming the file. */
export async function openDeskFile({ source, corrections }: DeskFile, hooks: OpenHooks = {}): Promise<OpenFile> {
  return openFile(await openSource(source), LIBRARIES, corrections, hooks);
}
