import type { ChunkPart, Series } from "../entry.ts";
import type { BlockChoice } from "./block-choice.ts";
import { type BlockField, FIELDS, fieldAt } from "./block-summary.ts";
import { RUN } from "./blocked-runs.ts";

/** All chunks' blocks, one after the other; hemispheres of a step follow each other, northern first. */
export class BlockRecord {
  readonly choice: BlockChoice;
  readonly nTime: number;
  readonly nLon: number;
  /** RUN numbers each. */
  readonly runs: Int32Array;
  /** First run of (step, hemisphere), shape (steps · hemispheres + 1). */
  readonly runFrom: Int32Array;
  /** First block of (step, hemisphere), same shape. */
  readonly blockFrom: Int32Array;
  readonly #blocks: Float64Array;
  readonly #unknown: readonly { readonly bits: Uint8Array | null; readonly from: number; readonly to: number }[];
  /** Cells of each hemisphere before this one, and of all. */
  readonly #shifts: readonly number[];
  /** Cells of a step. */
  readonly cells: number;

  constructor(parts: readonly ChunkPart[], series: Series, choice: BlockChoice) {
    this.choice = choice;
    this.nLon = series.grid.lon.length;
    this.nTime = series.times[1] - series.times[0];
    const lanes = choice.lanes.length;
    this.runs = new Int32Array(parts.reduce((sum, part) => sum + part.runs.length, 0));
    this.#blocks = new Float64Array(parts.reduce((sum, part) => sum + part.blocks.length, 0));
    this.runFrom = new Int32Array(this.nTime * lanes + 1);
    this.blockFrom = new Int32Array(this.nTime * lanes + 1);
    const unknown: { bits: Uint8Array | null; from: number; to: number }[] = [];
    let at = 0;
    let runs = 0;
    let blocks = 0;
    for (const part of parts) {
      this.runs.set(part.runs, runs);
      this.#blocks.set(part.blocks, blocks);
      runs += part.runs.length;
      blocks += part.blocks.length;
      const from = at / lanes;
      for (let k = 0; k < part.runCounts.length; k++, at++) {
        this.runFrom[at + 1] = this.runFrom[at] + part.runCounts[k];
        this.blockFrom[at + 1] = this.blockFrom[at] + part.blockCounts[k];
      }
      unknown.push({ bits: (part.unknown as Uint8Array | undefined) ?? null, from, to: at / lanes });
    }
    this.#unknown = unknown;
    const shifts = [0];
    for (const { rows } of choice.lanes) shifts.push(shifts[shifts.length - 1] + rows.length * this.nLon);
    this.#shifts = shifts;
    this.cells = shifts[lanes];
  }

  /** A number of a block. */
  number(block: number, field: BlockField): number {
    return this.#blocks[block * FIELDS + fieldAt(field)];
  }

  /** Where (step, hemisphere) stands in `runFrom` and `blockFrom`. */
  place(step: number, lane: number): number {
    return step * this.choice.lanes.length + lane;
  }

  get hasUnknown(): boolean {
    return this.#unknown.some(({ bits }) => bits !== null);
  }

  /** Call `visit` for each unknown cell of each step. */
  eachUnknown(visit: (step: number, lane: number, cell: number) => void): void {
    for (const { bits, from } of this.#unknown) {
      if (bits === null) continue;
      for (let byte = 0; byte < bits.length; byte++) {
        if (bits[byte] === 0) continue;
        for (let b = 0; b < 8; b++) {
          if ((bits[byte] & (1 << b)) === 0) continue;
          const step = from + Math.floor((8 * byte + b) / this.cells);
          let cell = (8 * byte + b) % this.cells;
          let lane = 0;
          while (cell >= this.#shifts[lane + 1]) lane += 1;
          cell -= this.#shifts[lane];
          visit(step, lane, cell);
        }
      }
    }
  }

  /** True if one of a block's cells is unknown at some step. */
  isBesideUnknown(block: number, blockStep: number, lane: number, step: number): boolean {
    const piece = this.#unknown.find(({ from, to }) => step >= from && step < to);
    if (piece === undefined || piece.bits === null) return false;
    const place = this.place(blockStep, lane);
    const own = block - this.blockFrom[place];
    const base = (step - piece.from) * this.cells + this.#shifts[lane];
    for (let r = this.runFrom[place]; r < this.runFrom[place + 1]; r++) {
      if (this.runs[RUN * r + 3] !== own) continue;
      const row = base + this.runs[RUN * r] * this.nLon;
      for (let i = row + this.runs[RUN * r + 1]; i < row + this.runs[RUN * r + 2]; i++)
        if ((piece.bits[i >> 3] & (1 << (i & 7))) !== 0) return true;
    }
    return false;
  }
}
