import { DataError } from "../../errors.ts";
import type { FormatLibraries, GreyImage } from "../libraries.ts";
import { spells, unsigned32 } from "./octets.ts";
import { type Scaling, scaledNumbers } from "./scaling.ts";

/** Width and height that a JPEG 2000 code stream promises, from its SIZ marker (ISO/IEC 15444-1, A.5.1); null if there is none. */
function jpeg2000Size(image: Uint8Array): readonly [number, number] | null {
  // The stream alone begins with SOC and SIZ; in a JP2 file it stands in a box.
  for (let i = 0; i + 24 <= Math.min(image.length, 512); i++) {
    if (image[i] !== 0xff || image[i + 1] !== 0x4f || image[i + 2] !== 0xff || image[i + 3] !== 0x51) continue;
    return [
      unsigned32(image, i + 8) - unsigned32(image, i + 16),
      unsigned32(image, i + 12) - unsigned32(image, i + 20),
    ];
  }
  return null;
}

/** Width and height that a PNG promises, from its first chunk (ISO/IEC 15948, 11.2.2). */
function pngSize(image: Uint8Array): readonly [number, number] | null {
  if (image.length < 24 || !spells(image, 1, "PNG") || !spells(image, 12, "IHDR")) return null;
  return [unsigned32(image, 16), unsigned32(image, 20)];
}

/**
 * Values packed as the grey levels of an image: templates 5.40 (JPEG 2000) and 5.41 (PNG).
 *
 * Its size is read before the library gets it: a damaged one could ask for all memory.
 *
 * @throws FormatError if the image is damaged or does not hold `count` points.
 */
export async function imageValues(
  kind: "jpeg2000" | "png",
  image: Uint8Array,
  libraries: FormatLibraries,
  count: number,
  scaling: Scaling,
): Promise<Float64Array> {
  const name = kind === "png" ? "PNG" : "JPEG 2000";
  const promised = kind === "png" ? pngSize(image) : jpeg2000Size(image);
  if (promised === null) throw new DataError("FormatError", `its ${name} image has no beginning`);
  if (promised[0] * promised[1] !== count)
    throw new DataError(
      "FormatError",
      `its ${name} image of ${promised[0]} × ${promised[1]} points holds not the ${count} that it should`,
    );
  const decode = await libraries[kind]();
  let decoded: GreyImage;
  try {
    decoded = decode(image);
  } catch (error) {
    if (error instanceof DataError) throw error;
    const reason = error instanceof Error ? error.message : String(error);
    throw new DataError("FormatError", `its ${name} image is damaged (${reason})`, error);
  }
  if (decoded.values.length !== count)
    throw new DataError("FormatError", `its ${name} image gives ${decoded.values.length} points, not ${count}`);
  return scaledNumbers(decoded.values, count, scaling);
}
