import { DataError } from "../errors.ts";
import type { ByteSource } from "./byte-source.ts";

/** @throws FormatError if [offset, offset + length) is not inside `size` bytes. */
export function requireInside(name: string, size: number, offset: number, length: number): void {
  if (!(offset >= 0 && length >= 0 && offset + length <= size))
    throw new DataError(
      "FormatError",
      `${name}: bytes ${offset} to ${offset + length} were asked for, but the file has ${size}. It is cut short; fetch it again.`,
    );
}

/** Bytes that are in memory already. */
export function memorySource(name: string, bytes: Uint8Array): ByteSource {
  const readNow = (offset: number, length: number): Uint8Array<ArrayBuffer> => {
    requireInside(name, bytes.length, offset, length);
    return bytes.slice(offset, offset + length) as Uint8Array<ArrayBuffer>;
  };
  return { name, size: bytes.length, read: async (offset, length) => readNow(offset, length), readNow };
}
