import wasm from "@cornerstonejs/codec-openjpeg/decodewasm?url&inline";
import createDecoder from "@cornerstonejs/codec-openjpeg/decodewasmjs";
import { DataError } from "../../core/errors.ts";
import type { GreyImage, Jpeg2000Decoder } from "../../core/formats/libraries.ts";
import { bytesOfBase64 } from "../../core/wasm/base64.ts";

const MOST_BITS = 16;

/** On Node the library asks for its own folder, which a bundled module has not; it fetches nothing from there. */
function started<T>(start: () => T): T {
  const globals = globalThis as { __dirname?: string };
  if (globals.__dirname !== undefined) return start();
  globals.__dirname = "";
  try {
    return start();
  } finally {
    delete globals.__dirname;
  }
}

type Library = Awaited<ReturnType<typeof createDecoder>>;

/** One instance for all images; a new one after it has failed, for its memory may be spoilt then. */
let loaded: Promise<Library> | null = null;

function library(): Promise<Library> {
  const wasmBinary = bytesOfBase64(wasm.slice(wasm.indexOf(",") + 1));
  return started(() => createDecoder({ wasmBinary, print: () => undefined, printErr: () => undefined }));
}

/** Samples of the one component of an image. */
function decoded({ J2KDecoder }: Library, codeStream: Uint8Array): GreyImage {
  const decoder = new J2KDecoder();
  try {
    decoder.getEncodedBuffer(codeStream.length).set(codeStream);
    decoder.decode();
    const { width, height, bitsPerSample, isSigned, componentCount } = decoder.getFrameInfo();
    // The library cuts deeper samples off at 16 bits and says nothing.
    if (bitsPerSample > MOST_BITS)
      throw new DataError(
        "FormatError",
        `its JPEG 2000 image has ${bitsPerSample} bits per value, and up to ${MOST_BITS} are read; repack it (simple packing)`,
      );
    const bytes = decoder.getDecodedBuffer();
    const isWide = bitsPerSample > 8;
    // A stream that is cut short gives nothing, and no error.
    if (componentCount !== 1 || bytes.length < width * height * (isWide ? 2 : 1))
      throw new DataError("FormatError", "a JPEG 2000 image ends early; the message is damaged");
    // Copied: the library's memory is used again.
    const buffer = bytes.slice().buffer as ArrayBuffer;
    const Samples = isWide ? (isSigned ? Int16Array : Uint16Array) : isSigned ? Int8Array : Uint8Array;
    return { width, height, values: new Samples(buffer) };
  } finally {
    decoder.delete();
  }
}

/** The JPEG 2000 library, compiled to WebAssembly, with its machine part at hand: neither network nor disk is asked for it. */
export async function jpeg2000Decoder(): Promise<Jpeg2000Decoder> {
  loaded ??= library();
  const mine = loaded;
  const forget = (): void => {
    if (loaded === mine) loaded = null;
  };
  mine.catch(forget);
  const held = await mine;
  return (codeStream) => {
    try {
      return decoded(held, codeStream);
    } catch (error) {
      if (error instanceof DataError) throw error;
      forget();
      const reason = error instanceof Error ? error.message : String(error);
      throw new DataError("FormatError", `a JPEG 2000 image cannot be read (${reason}); the message is damaged`, error);
    }
  };
}
