import type { BackgroundSpec } from "../../../core/background/spec.ts";
import type { Correction } from "../../../core/formats/dataset.ts";

/** A file of the case. `place` is its path where the shell knows it; a file from the file input has none. */
export interface CaseFile {
  readonly name: string;
  readonly size: number;
  readonly place: string | null;
}

/** What the waves are waves of: departures from the background, or the field itself. */
export type WavesOf = "anomaly" | "field";

export interface WavesChoice {
  readonly of: WavesOf;
  /** Degrees north, south end first, both included; equal ends = the nearest row. */
  readonly band: readonly [number, number];
}

export interface Cursor {
  readonly lat: number;
  /** Degrees east, [−180, 180). */
  readonly lon: number;
  /** Index into the field's steps. */
  readonly step: number;
}

export interface ChartChoice {
  readonly kind: "hemisphere" | "belt";
  readonly hemisphere: "north" | "south";
  /** Longitude at the foot of the hemisphere chart, degrees east. */
  readonly turn: number;
  /** Longitude at the left edge of the belt chart, degrees east. */
  readonly cut: number;
  readonly shading: "anomaly" | "field";
}

export type Theme = "light" | "night";
export type Question = "pattern";

/** Everything that is the user's: small, plain, and the file that is saved. All else is computed from it. */
export interface Case {
  readonly isohypse: 1;
  readonly kind: "case";
  readonly title: string;
  readonly files: readonly CaseFile[];
  readonly corrections: readonly Correction[];
  /** `file name/variable`; null while nothing usable is open. */
  readonly field: string | null;
  /** hPa; null on a field without levels. */
  readonly level: number | null;
  /** Number of the ensemble's member; null on a field without members. */
  readonly member: number | null;
  readonly background: BackgroundSpec;
  readonly waves: WavesChoice;
  readonly cursor: Cursor;
  readonly question: Question;
  readonly chart: ChartChoice;
  readonly theme: Theme;
}

export function emptyCase(theme: Theme = "light"): Case {
  return {
    isohypse: 1,
    kind: "case",
    title: "Untitled",
    files: [],
    corrections: [],
    field: null,
    level: null,
    member: null,
    background: { kind: "record-mean" },
    waves: { of: "anomaly", band: [55, 55] },
    cursor: { lat: 55, lon: 0, step: 0 },
    question: "pattern",
    chart: { kind: "hemisphere", hemisphere: "north", turn: 0, cut: -180, shading: "anomaly" },
    theme,
  };
}
