/** Where bytes come from: a File in the window, a file handle in batch, range requests to the local host. */
export interface ByteSource {
  /** File name as the user knows it; used in every message. */
  readonly name: string;
  /** Bytes in all. */
  readonly size: number;
  /** When it was last changed, milliseconds since 1970; absent where that is not known. */
  readonly modified?: number;
  /**
   * Exactly `length` bytes from `offset`, in a buffer of their own unless `into` is given.
   *
   * @param into Takes the bytes at its start where the source can read into memory at hand; the answer is then a view of it.
   * @throws FormatError if the range is not inside the source, or fewer bytes arrive.
   */
  read(offset: number, length: number, into?: Uint8Array<ArrayBuffer>): Promise<Uint8Array<ArrayBuffer>>;
  /**
   * The same at once, for libraries that cannot wait. In a window only workers have it.
   *
   * @throws FormatError as `read` does.
   */
  readNow(offset: number, length: number): Uint8Array<ArrayBuffer>;
}
