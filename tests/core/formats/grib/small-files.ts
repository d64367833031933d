import { readFileSync } from "node:fs";
import { LIBRARIES } from "../../../../app/codecs/libraries.ts";
import type { Correction, OpenFile } from "../../../../core/formats/dataset.ts";
import { type GribHooks, openGrib } from "../../../../core/formats/grib/open-grib.ts";
import { memorySource } from "../../../../core/formats/memory-source.ts";

/** One message as ecCodes decodes it (reference/make_values.py). */
export interface ReferenceMessage {
  readonly name: string;
  readonly level: number;
  /** Valid date as 20170101, time as 1200. */
  readonly date: number;
  readonly time: number;
  readonly shape: readonly [number, number];
  /** South → north, west → east; null where missing. */
  readonly values: readonly (number | null)[];
}

export interface SmallFile {
  readonly name: string;
  readonly bytes: Uint8Array<ArrayBuffer>;
  /** null where nothing in it is read. */
  readonly messages: readonly ReferenceMessage[] | null;
}

interface Stored {
  readonly name: string;
  readonly file: string;
  readonly messages: readonly ReferenceMessage[] | null;
}

const stored = JSON.parse(readFileSync(new URL("reference/small.json", import.meta.url), "utf8")) as readonly Stored[];

/** Tiny files of every packing, scanning mode and product. */
export const SMALL_FILES: readonly SmallFile[] = stored.map(({ name, file, messages }) => ({
  name,
  bytes: Uint8Array.from(Buffer.from(file, "base64")),
  messages,
}));

export function smallFile(name: string): SmallFile {
  const found = SMALL_FILES.find((file) => file.name === name);
  if (found === undefined) throw new Error(`no small file ${name}`);
  return found;
}

export function openSmall(
  name: string,
  corrections: readonly Correction[] = [],
  hooks: GribHooks = {},
): Promise<OpenFile> {
  return openGrib(memorySource(name, smallFile(name).bytes), LIBRARIES, corrections, hooks);
}

/** Days since 1970 of a date and time as ecCodes writes them. */
export function daysOfStamp(date: number, time: number): number {
  const text = String(date);
  const midnight = Date.UTC(Number(text.slice(0, 4)), Number(text.slice(4, 6)) - 1, Number(text.slice(6, 8)));
  return midnight / 86_400_000 + (Math.floor(time / 100) + (time % 100) / 60) / 24;
}
