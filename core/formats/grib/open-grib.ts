import { DataError } from "../../errors.ts";
import type { Slab } from "../../field/slab.ts";
import type { ByteSource } from "../byte-source.ts";
import type { Correction, FileContents, OpenFile, SlabRequest } from "../dataset.ts";
import type { FormatLibraries } from "../libraries.ts";
import { centreName } from "./centres.ts";
import { type GribField, gribFields } from "./field-groups.ts";
import type { GribIndex } from "./grib-index.ts";
import { MessageCache } from "./message-cache.ts";
import { spells } from "./octets.ts";
import { type ScanHooks, scannedIndex } from "./scan.ts";
import { copyRows } from "./scan-order.ts";

/** First bytes of a GRIB file, of either edition. */
export function looksLikeGrib(first: Uint8Array): boolean {
  return spells(first, 0, "GRIB");
}

export interface GribHooks extends ScanHooks {
  /** From an earlier opening; used if it fits the file's size, else made anew. */
  readonly index?: GribIndex | undefined;
}

function requireInside({ description }: GribField, request: SlabRequest): void {
  const { key, steps, levels, members, grid } = description;
  const isRange = ([from, to]: readonly [number, number], size: number) =>
    Number.isInteger(from) && Number.isInteger(to) && from >= 0 && from < to && to <= size;
  const isIndex = (i: number, size: number) => Number.isInteger(i) && i >= 0 && i < size;
  const nLevel = levels?.length ?? 1;
  const nMember = members?.length ?? 1;
  const member = request.member ?? 0;
  if (!isIndex(member, nMember))
    throw new DataError("ShapeError", `${key} has no member number ${member}; it has ${nMember}.`);
  const chosen = request.levels ?? [0];
  if (
    !isRange(request.times, steps.values.length) ||
    !isRange(request.rows ?? [0, grid.lat.length], grid.lat.length) ||
    chosen.length === 0 ||
    !chosen.every((level) => isIndex(level, nLevel))
  )
    throw new DataError(
      "ShapeError",
      `${key}: steps ${request.times}, levels ${chosen}, rows ${request.rows ?? "all"} are not inside its ${steps.values.length} steps, ${nLevel} levels, ${grid.lat.length} rows.`,
    );
}

/** Read a slab message by message; a cell without one is NaN. */
async function gribSlab(field: GribField, cache: MessageCache, request: SlabRequest): Promise<Slab> {
  requireInside(field, request);
  const { description, axes, conversion } = field;
  const [t0, t1] = request.times;
  const rows = request.rows ?? [0, description.grid.lat.length];
  const levels = request.levels ?? Array.from({ length: description.levels?.length ?? 1 }, (_, l) => l);
  const nLat = rows[1] - rows[0];
  const nLon = description.grid.lon.length;
  const plane = nLat * nLon;
  const size = (t1 - t0) * levels.length * plane;
  const data = request.into?.length === size ? request.into : new Float64Array(size);
  let at = 0;
  for (let t = t0; t < t1; t++)
    for (const level of levels) {
      const entry = field.messageAt(t, level, request.member ?? 0);
      if (entry === undefined) data.fill(Number.NaN, at, at + plane);
      else {
        const values = await cache.values(entry, axes.definition.ni * axes.definition.nj);
        copyRows(values, axes, rows, conversion.factor, conversion.offset, data, at);
      }
      at += plane;
    }
  return {
    quantity: description.quantity,
    units: description.units,
    data,
    shape: [t1 - t0, levels.length, nLat, nLon],
  };
}

function formatOf(index: GribIndex): string {
  const editions = [...new Set(index.entries.map(({ edition }) => edition))].sort();
  return editions.length > 1 ? "GRIB editions 1 and 2" : `GRIB edition ${editions[0] ?? ""}`.trim();
}

/**
 * Open a GRIB file of edition 1 or 2: headers are read, no fields.
 *
 * Messages of one parameter on pressure levels, one grid and one forecast start make a field; all else is left out with the reason.
 *
 * @param libraries   Decoders of JPEG 2000 and PNG, asked for when a message needs one.
 * @param corrections What the user said about variables; those of other files are ignored.
 * @throws FormatError in words if no message can be read; Cancelled.
 */
export async function openGrib(
  source: ByteSource,
  libraries: FormatLibraries,
  corrections: readonly Correction[],
  hooks: GribHooks = {},
): Promise<OpenFile> {
  const held = hooks.index;
  const index =
    held !== undefined && held.version === 1 && held.size === source.size ? held : await scannedIndex(source, hooks);
  if (index.entries.length === 0)
    throw new DataError("FormatError", index.notes[0] ?? `${source.name} holds no whole GRIB message. Fetch it again.`);
  const { fields, leftOut, notes } = gribFields(index, source.name, corrections);
  const byKey = new Map(fields.map((field) => [field.description.key, field]));
  const cache = new MessageCache(source, libraries);
  const centres = [...new Set(index.entries.map(({ centre }) => centre))].map(centreName);
  const contents: FileContents = {
    file: source.name,
    format: formatOf(index),
    bytes: source.size,
    fields: fields.map(({ description }) => description),
    leftOut,
    notes: [...index.notes, ...notes],
    about: { institution: centres.join(", ") },
  };
  return {
    contents,
    async read(key, request) {
      const field = byKey.get(key);
      if (field === undefined) throw new DataError("NotFoundError", `There is no field ${key} in what is open.`);
      return gribSlab(field, cache, request);
    },
    async close() {
      cache.clear();
    },
  };
}
