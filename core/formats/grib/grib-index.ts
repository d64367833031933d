/** A stretch of the file, bytes. */
export interface Extent {
  readonly at: number;
  readonly length: number;
}

/** A grid that is read, in degrees, as its definition says it. */
export interface GridDefinition {
  readonly kind: "regular" | "gaussian";
  readonly ni: number;
  readonly nj: number;
  readonly firstLat: number;
  readonly firstLon: number;
  readonly lastLat: number;
  readonly lastLon: number;
  /** Degrees between columns; null where it is not given. */
  readonly lonStep: number | null;
  /** Gaussian: rows from pole to equator. */
  readonly parallels: number;
  /** Scanning mode: 128 = columns run west, 64 = rows run north, 32 = columns consecutive, 16 = every other line turned round. */
  readonly scan: number;
  /** Unit in which its angles are given, degrees. */
  readonly precision: number;
}

/** Which member of an ensemble a message belongs to. */
export interface MemberMark {
  readonly number: number;
  /** False where the number may stand there without an ensemble: it then counts only beside other members. */
  readonly isSure: boolean;
  /** A negative perturbation, which shares its number with a positive one. */
  readonly isNegative: boolean;
}

/** One field in the file: where it is and what it is, without its numbers. */
export interface GribEntry {
  /** First byte of its message. */
  readonly at: number;
  readonly edition: 1 | 2;
  readonly centre: number;
  /** Edition 1: table version, parameter. Edition 2: discipline, category, number. */
  readonly parameter: readonly number[];
  /** Which of the index' grids; −1 where it is refused. */
  readonly grid: number;
  /** hPa; null on any other level. */
  readonly pressure: number | null;
  /** Seconds since 1970-01-01 00 UTC: start of the forecast, or time of the analysis. */
  readonly start: number;
  /** Seconds since 1970-01-01 00 UTC at which it is valid. */
  readonly valid: number;
  readonly member: MemberMark | null;
  readonly isEnsembleMean: boolean;
  /** Why it is no field here, in words; null if it is one. */
  readonly refusal: string | null;
  /** Edition 2: section 5. Edition 1: section 4, which holds the data too. */
  readonly packing: Extent;
  readonly bitmap: Extent | null;
  readonly data: Extent;
  /** Edition 1: decimal scale factor, which stands apart from the rest of the packing. */
  readonly decimalScale: number;
}

/** What a file holds, as plain data: it can be kept and handed back in when the file is opened again. */
export interface GribIndex {
  readonly version: 1;
  /** Bytes of the file that it was made from. */
  readonly size: number;
  readonly grids: readonly GridDefinition[];
  readonly entries: readonly GribEntry[];
  /** Messages in all, damaged ones not counted. */
  readonly messages: number;
  /** Damage, in words. */
  readonly notes: readonly string[];
}

/**
 * An index that was kept of a file as plain data; null if it is none, or of a file of another size.
 *
 * Only what this program wrote itself is handed in; whatever else stands there must not pass for an index all the same.
 */
export function keptIndex(held: unknown, source: { readonly size: number }): GribIndex | null {
  if (typeof held !== "object" || held === null) return null;
  const { version, size, grids, entries, notes, messages } = held as Partial<Record<keyof GribIndex, unknown>>;
  const isWhole =
    version === 1 &&
    size === source.size &&
    Array.isArray(grids) &&
    Array.isArray(entries) &&
    entries.length > 0 &&
    Array.isArray(notes) &&
    typeof messages === "number";
  return isWhole ? (held as GribIndex) : null;
}
