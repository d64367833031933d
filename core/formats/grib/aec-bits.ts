import { DataError } from "../../errors.ts";

/** The longest block is 64 samples of at most 32 bits; a unary code read in one go has under 25: a block cannot run further. */
const PADDING = 1024;

/** @throws FormatError */
export function damaged(why: string): never {
  throw new DataError("FormatError", `its CCSDS data are damaged: ${why}`);
}

/** Bits from a buffer with PADDING octets to spare. */
export class BitReader {
  readonly view: DataView;
  readonly endBit: number;
  byte = 0;
  bit = 0;

  constructor(bytes: Uint8Array) {
    const padded = new Uint8Array(bytes.length + PADDING);
    padded.set(bytes);
    this.view = new DataView(padded.buffer);
    this.endBit = bytes.length * 8;
  }

  skip(n: number): void {
    this.bit += n;
    this.byte += this.bit >>> 3;
    this.bit &= 7;
  }

  /** A whole number of 1 … 25 bits. */
  short(n: number): number {
    const value = (this.view.getInt32(this.byte) << this.bit) >>> (32 - n);
    this.skip(n);
    return value;
  }

  /** A whole number of 1 … 32 bits. */
  long(n: number): number {
    return n <= 25 ? this.short(n) : this.short(n - 16) * 65_536 + this.short(16);
  }

  /** Zeros before the next one, which is passed over too (a fundamental sequence, 3.2). */
  unary(): number {
    const zeros = Math.clz32(this.view.getInt32(this.byte) << this.bit);
    if (zeros < 25) {
      this.skip(zeros + 1);
      return zeros;
    }
    return this.#longUnary();
  }

  #longUnary(): number {
    let count = 0;
    for (;;) {
      // At most 25 bits of a word are sure to be the stream's.
      const zeros = Math.clz32((this.view.getInt32(this.byte) << this.bit) | 0x7f);
      if (zeros < 25) {
        this.skip(zeros + 1);
        return count + zeros;
      }
      count += 25;
      this.skip(25);
      this.requireInside();
    }
  }

  requireInside(): void {
    if (this.byte * 8 + this.bit > this.endBit) damaged("they end too early");
  }
}
