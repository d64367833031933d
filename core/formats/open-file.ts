import { type CancelSignal, DataError } from "../errors.ts";
import type { ByteSource } from "./byte-source.ts";
import { openCfFile } from "./cf/cf-file.ts";
import type { Correction, OpenFile } from "./dataset.ts";
import { keptIndex } from "./grib/grib-index.ts";
import { looksLikeGrib, openGrib } from "./grib/open-grib.ts";
import { scannedIndex } from "./grib/scan.ts";
import { looksLikeHdf5, openNetcdf4 } from "./hdf5/netcdf4-store.ts";
import type { FormatLibraries, IndexKeeper } from "./libraries.ts";
import { openNetcdfClassic } from "./netcdf/classic-store.ts";
import { looksLikeNetcdfClassic } from "./netcdf/header.ts";

/** First bytes of what people may drop here by mistake, or what is not read yet, with what to do. */
const KNOWN: readonly (readonly [bytes: readonly number[], words: string])[] = [
  [[0x1f, 0x8b], "is compressed (gzip). Unpack it and open what is inside"],
  [[0x50, 0x4b, 0x03, 0x04], "is a zip archive. Unpack it and open what is inside"],
  [[0x42, 0x5a, 0x68], "is compressed (bzip2). Unpack it and open what is inside"],
  [[0x28, 0xb5, 0x2f, 0xfd], "is compressed (zstd). Unpack it and open what is inside"],
  [[0x0e, 0x03, 0x13, 0x01], "is HDF4, which is not read. Convert it to netCDF classic and open that"],
  [[0x25, 0x50, 0x44, 0x46], "is a PDF document, not a file of fields"],
];

function startsWith(bytes: Uint8Array, first: readonly number[]): boolean {
  return first.every((byte, i) => bytes[i] === byte);
}

export interface OpenHooks {
  /** Share of a long opening that is done, 0 to 1. */
  readonly progress?: ((done: number) => void) | undefined;
  readonly signal?: CancelSignal | undefined;
  readonly keeper?: IndexKeeper | undefined;
}

/** A GRIB file by the index that was kept of it, else by a scan, which is then kept. */
async function openIndexedGrib(
  source: ByteSource,
  libraries: FormatLibraries,
  corrections: readonly Correction[],
  { progress, signal, keeper }: OpenHooks,
): Promise<OpenFile> {
  const held = keeper === undefined ? null : keptIndex(await keeper.held(source), source);
  if (held !== null) return openGrib(source, libraries, corrections, { index: held });
  const index = await scannedIndex(source, {
    ...(progress === undefined ? {} : { progress }),
    ...(signal === undefined ? {} : { signal }),
  });
  await keeper?.keep(source, index);
  return openGrib(source, libraries, corrections, { index });
}

/**
 * Open a file by what its first bytes say it is: headers and axes are read, no fields.
 *
 * @param libraries   Decoders that only some files need.
 * @param corrections What the user said about variables; those of other files are ignored.
 * @param hooks       For openings that take their time.
 * @throws FormatError in words for a file that is none of the formats read here, or damaged.
 */
export async function openFile(
  source: ByteSource,
  libraries: FormatLibraries,
  corrections: readonly Correction[] = [],
  hooks: OpenHooks = {},
): Promise<OpenFile> {
  if (source.size === 0) throw new DataError("FormatError", `${source.name} is empty. Fetch or copy it again.`);
  const first = await source.read(0, Math.min(8, source.size));
  if (looksLikeNetcdfClassic(first)) return openCfFile(await openNetcdfClassic(source), source.size, corrections);
  if (looksLikeHdf5(first))
    return openCfFile(await openNetcdf4(source, await libraries.hdf5()), source.size, corrections);
  if (looksLikeGrib(first)) return openIndexedGrib(source, libraries, corrections, hooks);
  const known = KNOWN.find(([bytes]) => startsWith(first, bytes));
  if (known !== undefined) throw new DataError("FormatError", `${source.name} ${known[1]}.`);
  const isText = first.every((byte) => byte === 9 || byte === 10 || byte === 13 || (byte >= 32 && byte < 127));
  const words = isText
    ? "is text"
    : `begins with bytes ${[...first].map((byte) => byte.toString(16).padStart(2, "0")).join(" ")}, which no format read here does`;
  throw new DataError(
    "FormatError",
    `${source.name} ${words}. Isohypse reads netCDF (classic, 64-bit offset, CDF-5, netCDF-4) and GRIB.`,
  );
}
