import type { StoredType } from "../variable-store.ts";

/** External types of the netCDF classic formats (NetCDF Classic Format Specification, nc_type), with bytes per value. */
export const CLASSIC_TYPES: ReadonlyMap<number, { readonly type: StoredType; readonly bytes: number }> = new Map([
  [1, { type: "int8", bytes: 1 }],
  [2, { type: "char", bytes: 1 }],
  [3, { type: "int16", bytes: 2 }],
  [4, { type: "int32", bytes: 4 }],
  [5, { type: "float32", bytes: 4 }],
  [6, { type: "float64", bytes: 8 }],
  // CDF-5 alone:
  [7, { type: "uint8", bytes: 1 }],
  [8, { type: "uint16", bytes: 2 }],
  [9, { type: "uint32", bytes: 4 }],
  [10, { type: "int64", bytes: 8 }],
  [11, { type: "uint64", bytes: 8 }],
] as const);

/** One variable as the header lays it out. */
export interface ClassicVariable {
  readonly name: string;
  readonly type: StoredType;
  readonly bytesPerValue: number;
  /** Indices into the header's dimensions, slowest first. */
  readonly dimIds: readonly number[];
  readonly attributes: Readonly<Record<string, string | number | readonly number[]>>;
  /** Byte where its values start: of the whole variable, or of its part of the first record. */
  readonly begin: number;
  readonly isRecord: boolean;
  /** Bytes of its values, padding left out: in all, or in one record. */
  readonly dataBytes: number;
}

export interface ClassicHeader {
  readonly version: 1 | 2 | 5;
  /** Length 0 marks the record dimension. */
  readonly dimensions: readonly { readonly name: string; readonly length: number }[];
  readonly attributes: Readonly<Record<string, string | number | readonly number[]>>;
  readonly variables: readonly ClassicVariable[];
  /** As the header states it; null: being streamed, to be told from the file's size. */
  readonly records: number | null;
  /** Bytes from one record to the next. */
  readonly recordStride: number;
  /** Bytes of the header itself. */
  readonly headerBytes: number;
}
