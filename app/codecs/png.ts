import { decode } from "fast-png";
import { DataError } from "../../core/errors.ts";
import type { GreyImage } from "../../core/formats/libraries.ts";

/** Samples of a PNG; those of RGB and RGBA pixels joined to whole numbers of 24 and 32 bits, as GRIB packs them. */
export function decodedPng(image: Uint8Array): GreyImage {
  try {
    const { width, height, channels, data, depth } = decode(image);
    if (data.length < width * height * channels) throw new Error("its samples end early");
    if (channels === 1)
      return { width, height, values: depth < 8 ? Uint8Array.from(data) : (data as Uint8Array | Uint16Array) };
    const values = new Uint32Array(width * height);
    for (let i = 0; i < values.length; i++) {
      let word = 0;
      for (let c = 0; c < channels; c++) word = word * 256 + (data[i * channels + c] as number);
      values[i] = word;
    }
    return { width, height, values };
  } catch (error) {
    throw new DataError(
      "FormatError",
      `a PNG image cannot be read (${error instanceof Error ? error.message : error}); the message is damaged`,
      error,
    );
  }
}
