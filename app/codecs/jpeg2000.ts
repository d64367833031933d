import wasm from "@cornerstonejs/codec-openjpeg/decodewasm?url&inline";
import createDecoder from "@cornerstonejs/codec-openjpeg/decodewasmjs";
import { DataError } from "../../core/errors.ts";
import type { Jpeg2000Decoder } from "../../core/formats/libraries.ts";
import { bytesOfBase64 } from "../../core/wasm/base64.ts";

const MOST_BITS = 16;

/** The JPEG 2000 library, compiled to WebAssembly, with its machine part at hand: neither network nor disk is asked for it. */
export async function jpeg2000Decoder(): Promise<Jpeg2000Decoder> {
  const wasmBinary = bytesOfBase64(wasm.slice(wasm.indexOf(",") + 1));
  const library = await createDecoder({ wasmBinary, print: () => undefined, printErr: () => undefined });
  return (codeStream) => {
    const decoder = new library.J2KDecoder();
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
      const each = bitsPerSample <= 8 ? 1 : 2;
      if (componentCount !== 1 || bytes.length < width * height * each) throw new Error("its samples end early");
      // Copied: the library's memory is used again.
      const buffer = bytes.slice().buffer as ArrayBuffer;
      const values =
        each === 1
          ? isSigned
            ? new Int8Array(buffer)
            : new Uint8Array(buffer)
          : isSigned
            ? new Int16Array(buffer)
            : new Uint16Array(buffer);
      return { width, height, values };
    } catch (error) {
      if (error instanceof DataError) throw error;
      throw new DataError(
        "FormatError",
        `a JPEG 2000 image cannot be read (${error instanceof Error ? error.message : String(error)}); the message is damaged`,
        error,
      );
    } finally {
      decoder.delete();
    }
  };
}
