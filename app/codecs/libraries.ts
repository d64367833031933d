import type { FormatLibraries } from "../../core/formats/libraries.ts";

/** The decoders of window and batch, each loaded when a file first needs it. */
export const LIBRARIES: FormatLibraries = {
  hdf5: async () => (await import("./hdf5.ts")).hdf5Library(),
  jpeg2000: async () => (await import("./jpeg2000.ts")).jpeg2000Decoder(),
  png: async () => (await import("./png.ts")).decodedPng,
};
