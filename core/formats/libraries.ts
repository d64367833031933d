import type { ByteSource } from "./byte-source.ts";

/** Decoders that come as libraries with a machine part of their own: each runtime hands them in, loaded when first needed. */
export interface FormatLibraries {
  readonly hdf5: () => Promise<Hdf5Library>;
  readonly jpeg2000: () => Promise<Jpeg2000Decoder>;
  readonly png: () => Promise<PngDecoder>;
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

/** Open HDF5 files by a source that can be read at once. */
export interface Hdf5Library {
  /** @throws FormatError in words. */
  open(source: ByteSource): Hdf5File;
}

/** What is needed of an open HDF5 file; to be settled by the netCDF-4 reader. */
export interface Hdf5File {
  close(): void;
}
