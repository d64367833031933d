import { DataError } from "../../errors.ts";
import { BitReader, damaged } from "./aec-bits.ts";

/** Flags of template 5.42, octet 22. */
const SIGNED = 1;
const PREPROCESSED = 8;
const RESTRICTED = 16;
const PADDED = 32;

/** Blocks after which a run of zero blocks ends at the latest (CCSDS 121.0-B-3, 3.4.3). */
const ZERO_RUN = 64;
/** Run length code for "all blocks up to there". */
const REMAINDER = 5;
/** Samples of so many bits are whole numbers of 32 bits through all steps. */
const NARROW = 28;

export interface AecForm {
  /** Bits per sample, 1 … 32. */
  readonly bits: number;
  /** Samples per block: 8, 16, 32 or 64. */
  readonly blockSize: number;
  /** Blocks between reference samples. */
  readonly blocksPerReference: number;
  readonly flags: number;
}

/** Second extension: a code of both samples of a pair, γ = (a + b)(a + b + 1)/2 + b (3.4.2). */
function pairOf(code: number): readonly [first: number, second: number] {
  const sum = Math.floor((Math.sqrt(8 * code + 1) - 1) / 2);
  const second = code - (sum * (sum + 1)) / 2;
  return [sum - second, second];
}

/** Bits of the code option's number (table 5-1 of CCSDS 121.0-B-3 with its restricted set). */
function optionBits({ bits, flags }: AecForm): number {
  if ((flags & RESTRICTED) !== 0 && bits <= 4) return bits <= 2 ? 1 : 2;
  return bits <= 8 ? 3 : bits <= 16 ? 4 : 5;
}

/** Samples whose upper bits are unary codes, all together, and whose `low` lower bits follow as they are (3.3). */
function splitSamples(
  reader: BitReader,
  samples: Int32Array | Float64Array,
  from: number,
  stop: number,
  low: number,
): void {
  const { view } = reader;
  // The place is kept at hand: this is the loop in which time goes.
  let { byte, bit } = reader;
  const scale = 2 ** low;
  for (let i = from; i < stop; i++) {
    const zeros = Math.clz32(view.getInt32(byte) << bit);
    if (zeros < 25) {
      samples[i] = zeros * scale;
      bit += zeros + 1;
      byte += bit >>> 3;
      bit &= 7;
      continue;
    }
    reader.byte = byte;
    reader.bit = bit;
    samples[i] = reader.unary() * scale;
    byte = reader.byte;
    bit = reader.bit;
  }
  if (low > 0 && low <= 25) {
    const shift = 32 - low;
    for (let i = from; i < stop; i++) {
      samples[i] = (samples[i] as number) + ((view.getInt32(byte) << bit) >>> shift);
      bit += low;
      byte += bit >>> 3;
      bit &= 7;
    }
  }
  reader.byte = byte;
  reader.bit = bit;
  if (low > 25) for (let i = from; i < stop; i++) samples[i] = (samples[i] as number) + reader.long(low);
}

/** Undo the unit-delay predictor and its mapper over one reference interval, in place (section 4). */
function unmapped(samples: Float64Array, from: number, to: number, most: number): void {
  let value = samples[from] as number;
  for (let i = from + 1; i < to; i++) {
    const mapped = samples[i] as number;
    const room = most - value;
    const theta = Math.min(value, room);
    if (mapped <= 2 * theta) value += mapped % 2 === 0 ? mapped / 2 : -(mapped + 1) / 2;
    else value = theta === value ? mapped : most - mapped;
    samples[i] = value;
  }
}

/** The same where all numbers stay below 2³⁰ and whole-number arithmetic is safe. */
function unmappedNarrow(samples: Int32Array, from: number, to: number, most: number): void {
  let value = samples[from] as number;
  for (let i = from + 1; i < to; i++) {
    const mapped = samples[i] as number;
    const half = (mapped + 1) >> 1;
    const isLower = value <= most >> 1;
    if (half <= (isLower ? value : most - value)) value += (mapped & 1) === 0 ? half : -half;
    else value = isLower ? mapped : most - mapped;
    samples[i] = value;
  }
}

/**
 * Decode an adaptive entropy coded stream (CCSDS 121.0-B-3, Lossless Data Compression) of unsigned samples.
 *
 * @returns Whole numbers, shape (count).
 * @throws FormatError if the form is none, or the stream ends early.
 */
export function aecSamples(bytes: Uint8Array, form: AecForm, count: number): Float64Array | Int32Array {
  const { bits, blockSize, blocksPerReference, flags } = form;
  if (!(bits >= 1 && bits <= 32)) damaged(`${bits} bits per sample`);
  if (![8, 16, 32, 64].includes(blockSize)) damaged(`blocks of ${blockSize} samples`);
  if (!(blocksPerReference >= 1 && blocksPerReference <= 4096)) damaged(`${blocksPerReference} blocks per reference`);
  if ((flags & SIGNED) !== 0) damaged("their samples are signed, which packed fields never are");
  if ((flags & PADDED) !== 0)
    throw new DataError("FormatError", "its CCSDS intervals are padded, which is not read; repack it (simple packing)");
  const isMapped = (flags & PREPROCESSED) !== 0;
  const reader = new BitReader(bytes);
  const idBits = optionBits(form);
  const uncoded = 2 ** idBits - 1;
  const perReference = blockSize * blocksPerReference;
  const blocks = Math.ceil(count / blockSize);
  // Every block takes a bit at least but for those of a zero run, which is 64 blocks long at most.
  if (blocks > reader.endBit * ZERO_RUN) damaged(`${bytes.length} bytes for ${count} samples`);
  const samples = bits <= NARROW ? new Int32Array(blocks * blockSize) : new Float64Array(blocks * blockSize);
  const most = 2 ** bits - 1;
  for (let block = 0; block < blocks; ) {
    const inInterval = block % blocksPerReference;
    const isFirst = inInterval === 0 && isMapped;
    const start = block * blockSize;
    const stop = start + blockSize;
    const option = reader.short(idBits);
    const isLow = option === 0;
    const isPaired = isLow && reader.short(1) === 1;
    let i = start;
    if (isFirst && option !== uncoded) samples[i++] = reader.long(bits);
    let done = 1;
    if (isLow && !isPaired) {
      const run = reader.unary() + 1;
      const left = Math.min(blocksPerReference - inInterval, ZERO_RUN - (inInterval % ZERO_RUN));
      done = run === REMAINDER ? left : run > REMAINDER ? run - 1 : run;
      // The samples are zero already.
      if (done > blocksPerReference - inInterval) damaged("a run of zeros goes beyond its interval");
    } else if (isPaired) {
      // The reference sample takes the place of the first pair's first.
      if (i > start) samples[i++] = pairOf(reader.unary())[1];
      while (i < stop) {
        const [first, second] = pairOf(reader.unary());
        samples[i++] = first;
        samples[i++] = second;
      }
    } else if (option === uncoded) {
      for (; i < stop; i++) samples[i] = reader.long(bits);
    } else splitSamples(reader, samples, i, stop, option - 1);
    reader.requireInside();
    block += done;
  }
  if (isMapped)
    for (let from = 0; from < samples.length; from += perReference) {
      const to = Math.min(from + perReference, samples.length);
      if (samples instanceof Int32Array) unmappedNarrow(samples, from, to, most);
      else unmapped(samples, from, to, most);
    }
  return samples;
}
