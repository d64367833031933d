import { DataError } from "../../errors.ts";
import { secondsOf, validSeconds } from "./forecast-time.ts";
import type { Extent, GribEntry, MemberMark } from "./grib-index.ts";
import { edition1Grid } from "./grid-definition.ts";
import type { HeaderWindow } from "./header-window.ts";
import { levelRefusal } from "./level-types.ts";
import type { MessageList } from "./message-list.ts";
import { signed16, unsigned16, unsigned24 } from "./octets.ts";
import { edition1PackingRefusal } from "./packing-refusal.ts";
import { ECMWF } from "./parameters.ts";
import type { ScannedMessage } from "./scan.ts";

const PRODUCT_MOST = 60; // octets that are used: the local part up to the ensemble's size
const GRID_OCTETS = 28;
const HPA = 100;
const ECMWF_PA = 210;

/** Time range indicators that are no moment; FM 92, code table 5. */
const RANGES: Readonly<Record<number, string>> = {
  2: "valid over a range of time",
  3: "an average over time",
  4: "an accumulation over time",
  5: "a difference between two times",
  6: "an average over time",
  7: "an average over time",
  51: "a climatological mean",
  113: "an average of several forecasts",
  114: "an accumulation of several forecasts",
  115: "an average of several forecasts",
  116: "an accumulation of several forecasts",
  117: "an average of several forecasts",
  118: "a variance in time",
  119: "a standard deviation in time",
  123: "an average of several analyses",
  124: "an accumulation of several analyses",
};

/** Local definitions of ECMWF that number members, and where: `wide` ones in two octets. */
const MEMBER_DEFINITIONS: Readonly<Record<number, { readonly isWide: boolean }>> = {
  1: { isWide: false },
  15: { isWide: true },
  26: { isWide: false },
  30: { isWide: false },
  36: { isWide: false },
};
/** MARS types: control and perturbed forecasts; means and spreads of an ensemble. */
const CONTROL = 10;
const PERTURBED = 11;
const ENSEMBLE_MEAN = 17;
const ENSEMBLE_SPREAD = 18;

interface Local {
  readonly member: MemberMark | null;
  readonly isEnsembleMean: boolean;
  readonly isSpread: boolean;
}

/** What ECMWF's local part of section 1 says about ensembles. */
function localPart(product: Uint8Array, length: number): Local {
  const none: Local = { member: null, isEnsembleMean: false, isSpread: false };
  const place = MEMBER_DEFINITIONS[product[40] ?? 0];
  if (product[4] !== ECMWF || length < 52 || place === undefined) return none;
  const type = product[42] as number;
  if (type === ENSEMBLE_MEAN || type === ENSEMBLE_SPREAD)
    return { member: null, isEnsembleMean: type === ENSEMBLE_MEAN, isSpread: type === ENSEMBLE_SPREAD };
  const number = place.isWide ? unsigned16(product, 49) : (product[49] as number);
  const total = place.isWide ? (length < 57 ? 0 : unsigned16(product, 55)) : (product[50] as number);
  const isSure = total > 0 || type === CONTROL || type === PERTURBED;
  return { ...none, member: { number, isSure, isNegative: false } };
}

/** Seconds since 1970 of the reference time. @throws MetadataError for a date that is none, a monthly mean's day 0 among them. */
function referenceSeconds(product: Uint8Array): number {
  const [year, month, day, hour, minute, century] = [12, 13, 14, 15, 16, 24].map((at) => product[at] as number) as [
    number,
    number,
    number,
    number,
    number,
    number,
  ];
  return secondsOf({ year: (century - 1) * 100 + year, month, day, hour, minute: minute > 59 ? 0 : minute, second: 0 });
}

/** Start and valid time. @throws MetadataError whose message says why this is no moment. */
function times(product: Uint8Array): { readonly start: number; readonly valid: number } {
  const start = referenceSeconds(product);
  const range = product[20] as number;
  if (range === 1) return { start, valid: start };
  if (range !== 0 && range !== 10)
    throw new DataError("MetadataError", `it is ${RANGES[range] ?? `of time range indicator ${range}`}, no moment`);
  const step = range === 10 ? unsigned16(product, 18) : (product[18] as number);
  return { start, valid: validSeconds(1, start, step, product[17] as number) };
}

function pressureOf(product: Uint8Array): number {
  const type = product[9] as number;
  const value = unsigned16(product, 10);
  const pressure = type === HPA ? value : type === ECMWF_PA ? value / 100 : Number.NaN;
  if (Number.isNaN(pressure)) throw new DataError("MetadataError", levelRefusal(1, type, value));
  if (!(pressure > 0)) throw new DataError("MetadataError", `its pressure is ${pressure} hPa`);
  return pressure;
}

/**
 * Total length, and that of section 4.
 *
 * Messages beyond 2²³ octets count theirs in 120s, section 4 then saying how far the last is filled: ECMWF's practice,
 * which others follow, for edition 1 has no more than three octets for a length.
 */
function lengths(stated: number, dataAt: number, statedData: number): { total: number; data: number } {
  if (stated < 0x80_0000 || statedData >= 120) return { total: stated, data: statedData };
  const total = (stated & 0x7f_ffff) * 120 - statedData + 4;
  return { total, data: total - 4 - dataAt };
}

/**
 * Read the headers of an edition 1 message (WMO Manual on Codes, FM 92 GRIB edition 1).
 *
 * @throws FormatError if its sections do not fit the message.
 */
export async function edition1Message(window: HeaderWindow, at: number, list: MessageList): Promise<ScannedMessage> {
  const stated = unsigned24(await window.bytes(at, 8), 4);
  const productAt = at + 8;
  const productLength = unsigned24(await window.bytes(productAt, 28), 0);
  if (productLength < 28) throw new DataError("FormatError", `its section 1 has ${productLength} bytes`);
  const product = (await window.bytes(productAt, Math.min(productLength, PRODUCT_MOST))).slice();
  const flags = product[7] as number;
  let next = productAt + productLength;
  let grid: Uint8Array | null = null;
  if ((flags & 0x80) !== 0) {
    const length = unsigned24(await window.bytes(next, 3), 0);
    grid = (await window.bytes(next, Math.max(3, Math.min(length, GRID_OCTETS)))).slice();
    next += length;
  }
  let bitmap: Extent | null = null;
  let isKnownBitmap = true;
  if ((flags & 0x40) !== 0) {
    const head = await window.bytes(next, 6);
    const length = unsigned24(head, 0);
    if (length < 6) throw new DataError("FormatError", `its section 3 has ${length} bytes`);
    isKnownBitmap = unsigned16(head, 4) === 0;
    bitmap = { at: next, length };
    next += length;
  }
  const found = lengths(stated, next - at, unsigned24(await window.bytes(next, 3), 0));
  const end = at + found.total;
  if (end > window.size)
    throw new DataError("FormatError", `it would end at byte ${end}, and the file has ${window.size}`);
  if (found.data < 11 || next + found.data > end - 4)
    throw new DataError("FormatError", "its sections do not fit into its length");
  const data = { at: next, length: found.data };
  const base = {
    at,
    edition: 1 as const,
    centre: product[4] as number,
    parameter: [product[3] as number, product[8] as number],
    packing: data,
    bitmap,
    data,
    decimalScale: signed16(product, 26),
  };
  const flags4 = (await window.bytes(next, 4))[3] as number;
  const unread = isKnownBitmap
    ? edition1PackingRefusal(flags4)
    : "its missing points are in a bitmap of its centre that is not in the file";
  return { length: found.total, entries: [understood(base, product, productLength, grid, unread, list)] };
}

type Base = Pick<GribEntry, "at" | "edition" | "centre" | "parameter" | "packing" | "bitmap" | "data" | "decimalScale">;

function understood(
  base: Base,
  product: Uint8Array,
  productLength: number,
  grid: Uint8Array | null,
  unread: string | null,
  list: MessageList,
): GribEntry {
  const { isSpread, ...local } = localPart(product, productLength);
  let entry: GribEntry = { ...base, ...local, grid: -1, pressure: null, start: 0, valid: 0, refusal: null };
  try {
    if (grid === null || grid.length < GRID_OCTETS)
      throw new DataError(
        "GridError",
        `its grid, number ${product[6]} of a catalogue, is not described in the file; regrid it`,
      );
    entry = { ...entry, grid: list.placeOf(edition1Grid(grid)) };
    entry = { ...entry, pressure: pressureOf(product) };
    if (isSpread)
      throw new DataError("MetadataError", "it is the spread of an ensemble, not a state of the atmosphere");
    entry = { ...entry, ...times(product) };
    if (unread !== null) throw new DataError("FormatError", unread);
    return entry;
  } catch (error) {
    if (!(error instanceof DataError)) throw error;
    return { ...entry, refusal: error.message };
  }
}
