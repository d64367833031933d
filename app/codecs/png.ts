import { decode } from "fast-png";
import { DataError } from "../../core/errors.ts";
import type { GreyImage } from "../../core/formats/libraries.ts";

/** Samples of 1, 2 and 4 bits lie side by side in a byte, each row from a byte of its own (ISO/IEC 15948, 7.2). */
function unpacked(data: Uint8Array, width: number, height: number, depth: number): Uint8Array {
  const rowBytes = Math.ceil((width * depth) / 8);
  const values = new Uint8Array(width * height);
  const most = 2 ** depth - 1;
  for (let i = 0; i < values.length; i++) {
    const column = i % width;
    const byte = data[((i - column) / width) * rowBytes + ((column * depth) >> 3)] as number;
    values[i] = (byte >> (8 - depth - ((column * depth) & 7))) & most;
  }
  return values;
}

/** Samples of a PNG; those of RGB and RGBA pixels joined to whole numbers of 24 and 32 bits, as GRIB packs them. */
export function decodedPng(image: Uint8Array): GreyImage {
  try {
    const { width, height, channels, data, depth } = decode(image);
    const isPacked = depth < 8;
    const needed = isPacked ? height * Math.ceil((width * depth) / 8) : width * height * channels;
    if (data.length < needed) throw new Error("its samples end early");
    if (isPacked && channels === 1)
      return { width, height, values: unpacked(data as Uint8Array, width, height, depth) };
    if (channels === 1) return { width, height, values: data as Uint8Array | Uint16Array };
    if (depth !== 8) throw new Error(`it has ${channels} channels of ${depth} bits`);
    const values = new Uint32Array(width * height);
    for (let i = 0; i < values.length; i++) {
      let word = 0;
      for (let c = 0; c < channels; c++) word = word * 256 + (data[i * channels + c] as number);
      values[i] = word;
    }
    return { width, height, values };
  } catch (error) {
    // Where the data end early the library names what is not there.
    const reason = error instanceof Error ? error.message.replace(/:? undefined/, "") : String(error);
    throw new DataError("FormatError", `a PNG image cannot be read (${reason}); the message is damaged`, error);
  }
}
