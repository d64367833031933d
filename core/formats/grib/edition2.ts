import { DataError } from "../../errors.ts";
import { secondsOf, validSeconds } from "./forecast-time.ts";
import type { Extent, GribEntry, MemberMark } from "./grib-index.ts";
import { edition2Grid } from "./grid-definition.ts";
import type { HeaderWindow } from "./header-window.ts";
import { levelRefusal } from "./level-types.ts";
import type { MessageList } from "./message-list.ts";
import { signed8, signed32, spells, unsigned16, unsigned32, unsigned64 } from "./octets.ts";
import { edition2PackingRefusal } from "./packing-refusal.ts";
import type { ScannedMessage } from "./scan.ts";

/** Octets used of each section. */
const USED: Readonly<Record<number, number>> = { 1: 21, 3: 72, 4: 40, 5: 11, 6: 6 };
const PASCAL = 100;

/** Why fields of a product template are left out; FM 92, code table 4.0. Those not named: 0, 1, 2 and 60 are read. */
function templateRefusal(template: number): string | null {
  if ([0, 1, 2, 60].includes(template)) return null;
  if ([8, 11, 12, 13, 14, 42, 43, 46, 47, 61].includes(template))
    return "it is an average, an accumulation or an extreme over time, no moment";
  if ([5, 9].includes(template)) return "it is a probability, not a state of the atmosphere";
  if ([6, 10].includes(template)) return "it is a percentile of an ensemble, not a state of the atmosphere";
  if ([3, 4].includes(template)) return "it belongs to a cluster of an ensemble";
  if (template === 7) return "it is an analysis or forecast error, not a state of the atmosphere";
  return `its product definition template, 4.${template}, is not read`;
}

/** Derived forecasts that are a mean of all members; code table 4.7. */
const MEANS = [0, 1, 6];

interface Product {
  readonly template: number;
  readonly bytes: Uint8Array;
}

interface Sections {
  identification: Uint8Array | null;
  grid: Uint8Array | null;
  product: Product | null;
  packing: { readonly extent: Extent; readonly template: number } | null;
  /** The last bitmap that stood in the message: later fields may use it again. */
  bitmap: Extent | null;
  indicator: number;
}

function referenceSeconds(identification: Uint8Array): number {
  const [month, day, hour, minute, second] = [14, 15, 16, 17, 18].map((at) => identification[at] as number) as [
    number,
    number,
    number,
    number,
    number,
  ];
  return secondsOf({
    year: unsigned16(identification, 12),
    month,
    day,
    hour,
    minute,
    second: second > 59 ? 0 : second,
  });
}

function times(identification: Uint8Array, product: Uint8Array): { readonly start: number; readonly valid: number } {
  const reference = referenceSeconds(identification);
  const step = signed32(product, 18);
  const unit = product[17] as number;
  // Significance 2: the reference time is the time of verification (code table 1.2).
  if (identification[11] === 2) return { start: validSeconds(2, reference, -step, unit), valid: reference };
  return { start: reference, valid: validSeconds(2, reference, step, unit) };
}

function pressureOf(product: Uint8Array): number {
  const type = product[22] as number;
  const value = unsigned32(product, 24) === 0xffff_ffff ? Number.NaN : signed32(product, 24);
  // 255 and −127 are both "not given", which a value of 0 may have.
  const scale = product[23] === 255 ? 0 : signed8(product, 23);
  // Divided by the power: 85 · 10³ and 850 · 10² then give the same number.
  const scaled = scale > 0 ? value / 10 ** scale : value * 10 ** -scale;
  if (type !== PASCAL) throw new DataError("MetadataError", levelRefusal(2, type, scaled));
  const second = product[28] as number;
  const isSame = second === type && product[29] === product[23] && unsigned32(product, 30) === unsigned32(product, 24);
  if (second !== 255 && !isSame)
    throw new DataError("MetadataError", "it lies on a layer between two levels, not on one pressure level");
  if (!(scaled > 0 && scaled < 1e7)) throw new DataError("MetadataError", `its pressure is ${scaled} Pa`);
  return Math.round(scaled * 1e7) / 1e9;
}

/** Member, from templates 4.1 and 4.60 (code table 4.6: 0 and 1 control, 2 negatively and 3 positively perturbed). */
function memberOf({ template, bytes }: Product): MemberMark | null {
  if (template !== 1 && template !== 60) return null;
  const type = bytes[34] as number;
  return { number: type < 2 ? 0 : (bytes[35] as number), isSure: true, isNegative: type === 2 };
}

function understood(sections: Sections, data: Extent, at: number, discipline: number, list: MessageList): GribEntry {
  const { identification, grid, product, packing, bitmap, indicator } = sections;
  if (identification === null || product === null || packing === null || grid === null || indicator < 0)
    throw new DataError("FormatError", "a section is missing before its data");
  const { template, bytes } = product;
  let entry: GribEntry = {
    at,
    edition: 2,
    centre: unsigned16(identification, 5),
    parameter: [discipline, bytes[9] as number, bytes[10] as number],
    grid: -1,
    pressure: null,
    start: 0,
    valid: 0,
    member: memberOf(product),
    isEnsembleMean: template === 2,
    refusal: null,
    packing: packing.extent,
    bitmap: indicator === 255 ? null : bitmap,
    data,
    decimalScale: 0,
  };
  const refuse = (why: string): never => {
    throw new DataError("MetadataError", why);
  };
  try {
    entry = { ...entry, grid: list.placeOf(edition2Grid(grid)) };
    const refusal = templateRefusal(template);
    // Templates up to 4.15 begin alike: where it lies is said first, as people ask for it first.
    if (refusal === null || template <= 15) entry = { ...entry, pressure: pressureOf(bytes) };
    if (refusal !== null) refuse(refusal);
    if (template === 2 && !MEANS.includes(bytes[34] as number))
      refuse("it is the spread or another statistic of an ensemble, not a state of the atmosphere");
    entry = { ...entry, ...times(identification, bytes) };
    if (indicator !== 255 && indicator !== 254 && indicator !== 0)
      refuse("its missing points are in a bitmap of its centre that is not in the file");
    if (indicator !== 255 && bitmap === null) refuse("it uses a bitmap that does not stand before it in the message");
    const unread = edition2PackingRefusal(packing.template);
    if (unread !== null) refuse(unread);
    return entry;
  } catch (error) {
    if (!(error instanceof DataError)) throw error;
    return { ...entry, refusal: error.message };
  }
}

/**
 * Read the headers of an edition 2 message; sections 2 to 7, 3 to 7 or 4 to 7 may repeat, each time for another field.
 *
 * @throws FormatError if its sections do not fit the message.
 */
export async function edition2Message(window: HeaderWindow, at: number, list: MessageList): Promise<ScannedMessage> {
  const head = await window.bytes(at, 16);
  const discipline = head[6] as number;
  const length = unsigned64(head, 8);
  const end = at + length;
  if (end > window.size)
    throw new DataError("FormatError", `it would end at byte ${end}, and the file has ${window.size}`);
  const entries: GribEntry[] = [];
  const sections: Sections = {
    identification: null,
    grid: null,
    product: null,
    packing: null,
    bitmap: null,
    indicator: -1,
  };
  for (let next = at + 16; next < end - 4; ) {
    const start = await window.bytes(next, 5);
    const size = unsigned32(start, 0);
    const number = start[4] as number;
    if (number < 1 || number > 7 || size < 5 || next + size > end - 4)
      throw new DataError(
        "FormatError",
        spells(start, 0, "7777")
          ? `it ends ${end - next - 4} bytes too early`
          : `at byte ${next} stands no section that fits (number ${number}, ${size} bytes)`,
      );
    const used = USED[number];
    const extent = { at: next, length: size };
    if (used !== undefined) {
      // A copy, filled up with "not given": a short template has its last octets in no file.
      const bytes = new Uint8Array(used).fill(255);
      bytes.set(await window.bytes(next, Math.min(size, used)));
      if (number === 1) sections.identification = bytes;
      else if (number === 3) sections.grid = bytes;
      else if (number === 4) sections.product = { template: unsigned16(bytes, 7), bytes };
      else if (number === 5) sections.packing = { extent, template: unsigned16(bytes, 9) };
      else {
        sections.indicator = bytes[5] as number;
        if (sections.indicator === 0) sections.bitmap = extent;
      }
    } else if (number === 7) {
      entries.push(understood(sections, extent, at, discipline, list));
      sections.indicator = -1;
      sections.packing = null;
    }
    next += size;
  }
  if (entries.length === 0) throw new DataError("FormatError", "it holds no data");
  return { length, entries };
}
