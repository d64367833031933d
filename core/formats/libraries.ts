import type { ByteSource } from "./byte-source.ts";
import type { AttributeValue, StoredType } from "./variable-store.ts";

/** Decoders that come as libraries with a machine part of their own: each runtime hands them in, loaded when first needed. */
export interface FormatLibraries {
  readonly hdf5: () => Promise<Hdf5Library>;
  readonly jpeg2000: () => Promise<Jpeg2000Decoder>;
  readonly png: () => Promise<PngDecoder>;
}

/** Keeps what a long scan of a file found, for the next opening of the same file. */
export interface IndexKeeper {
  /** What was kept of this file, as plain data; null if nothing was, or the file has changed since. */
  held(source: ByteSource): Promise<unknown>;
  /** A failure to keep is no failure to open: this never throws. */
  keep(source: ByteSource, index: unknown): Promise<void>;
}

/** Grey values of an image, row by row from the top, as whole numbers. */
export interface GreyImage {
  readonly width: number;
  readonly height: number;
  readonly values: Int32Array | Uint32Array | Uint16Array | Int16Array | Uint8Array | Int8Array;
}

/** @throws FormatError for a damaged code stream. */
export type Jpeg2000Decoder = (codeStream: Uint8Array) => GreyImage;

/** A PNG's samples; RGB and RGBA ones are joined to whole numbers of 24 and 32 bits. @throws FormatError for a damaged image. */
export type PngDecoder = (image: Uint8Array) => GreyImage;

/** Opens HDF5 files by a source that can be read at once. */
export interface Hdf5Library {
  /** @throws FormatError in words for a file that is damaged. */
  open(source: ByteSource): Hdf5File;
}

/** One dataset of an HDF5 file, described without reading its numbers. */
export interface Hdf5Dataset {
  /** `/group/name`. */
  readonly path: string;
  /** How its numbers are stored; "text" for strings; null for what is neither. */
  readonly type: Exclude<StoredType, "char"> | "text" | null;
  /** The HDF5 class, for words: "compound", "opaque" … */
  readonly what: string;
  readonly shape: readonly number[];
  readonly unlimited: readonly boolean[];
  /** Sizes of its chunks; null where it lies in one piece. */
  readonly chunks: readonly number[] | null;
  readonly filters: readonly { readonly id: number; readonly name: string }[];
  readonly attributes: Readonly<Record<string, AttributeValue>>;
  /** True for a dataset that is a dimension scale itself. */
  readonly isScale: boolean;
}

export type Hdf5Numbers =
  | Int8Array
  | Uint8Array
  | Int16Array
  | Uint16Array
  | Int32Array
  | Uint32Array
  | BigInt64Array
  | BigUint64Array
  | Float32Array
  | Float64Array;

export interface Hdf5File {
  /** Attributes of the root group. */
  readonly attributes: Readonly<Record<string, AttributeValue>>;
  readonly datasets: readonly Hdf5Dataset[];
  /** What had to be left out on opening, in words. */
  readonly notes: readonly string[];
  /** Path of the dataset that is the scale of a dimension; null where there is none. Slow, and endless on some damaged files. */
  scale(path: string, dimension: number): string | null;
  /**
   * Numbers of a hyperslab as they are stored, row-major, given to `take`.
   *
   * The array is the library's own memory, gone once `take` returns.
   *
   * @throws FormatError in words.
   */
  read<T>(path: string, start: readonly number[], count: readonly number[], take: (numbers: Hdf5Numbers) => T): T;
  close(): void;
}
