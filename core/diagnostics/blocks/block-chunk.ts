import type { ChunkInput, ChunkPart, Series } from "../entry.ts";
import type { BlockChoice, Lane } from "./block-choice.ts";
import { BlockSummaries, FIELDS } from "./block-summary.ts";
import { RUN, RunFinder } from "./blocked-runs.ts";
import { persistentStates } from "./persistence.ts";
import { recordPieces } from "./record-pieces.ts";
import { oneDimensionalStates, type Plane, twoDimensionalStates, UNKNOWN } from "./reversal.ts";

/** A list of numbers that grows; a chunk cannot know how many blocks it will find. */
class Growing<T extends Int32Array<ArrayBuffer> | Float64Array<ArrayBuffer>> {
  array: T;
  length = 0;
  readonly #make: (size: number) => T;

  constructor(make: (size: number) => T) {
    this.#make = make;
    this.array = make(1024);
  }

  /** Room for `more` numbers; returns where they start. */
  room(more: number): number {
    const at = this.length;
    this.length += more;
    if (this.length > this.array.length) {
      const wider = this.#make(Math.max(this.length, 2 * this.array.length));
      wider.set(this.array);
      this.array = wider;
    }
    return at;
  }

  done(): T {
    return this.array.slice(0, this.length) as T;
  }
}

/** Cells of one hemisphere. */
function planeOf(lane: Lane, nLon: number): Plane {
  const source = new Int32Array(lane.rows.length * nLon);
  lane.rows.forEach((row, j) => {
    source.fill(row, j * nLon, (j + 1) * nLon);
  });
  return { states: new Uint8Array(source.length), source };
}

/** One bit for each cell of each step that is unknown; null where none is. */
class UnknownBits {
  readonly #cells: number;
  readonly #steps: number;
  bits: Uint8Array<ArrayBuffer> | null = null;

  constructor(steps: number, cells: number) {
    this.#steps = steps;
    this.#cells = cells;
  }

  add(step: number, shift: number, states: Uint8Array): void {
    let at = states.indexOf(UNKNOWN);
    if (at < 0) return;
    this.bits ??= new Uint8Array(Math.ceil((this.#steps * this.#cells) / 8));
    const from = step * this.#cells + shift;
    for (; at >= 0 && at < states.length; at++)
      if (states[at] === UNKNOWN) this.bits[(from + at) >> 3] |= 1 << ((from + at) & 7);
  }
}

/**
 * Reduce the chunk's own steps to their blocked runs and the numbers of their blocks.
 *
 * @returns `runs`, RUN numbers each; `runCounts` and `blockCounts`, shape (steps, hemispheres); `blocks`, FIELDS numbers each;
 * and `unknown`, one bit for each cell (step, hemisphere, row, column), absent where none is.
 */
export function blockChunk(input: ChunkInput, series: Series, choice: BlockChoice): ChunkPart {
  const nLon = series.grid.lon.length;
  const { data, shape } = input.slabs.field;
  const nRow = shape[2];
  const first = choice.rows[0];
  const [from, to] = input.times;
  const skipped = from - input.loaded[0];
  const steps = to - from;
  const planes = choice.lanes.map((lane) => planeOf(lane, nLon));
  const cells = planes.reduce((sum, plane) => sum + plane.states.length, 0);
  const finder = new RunFinder(nLon, choice.leastColumns);
  const summaries = new BlockSummaries(series, choice);
  const runs = new Growing((size) => new Int32Array(size));
  const blocks = new Growing((size) => new Float64Array(size));
  const runCounts = new Int32Array(steps * planes.length);
  const blockCounts = new Int32Array(runCounts.length);
  const unknown = new UnknownBits(steps, cells);
  const persistent =
    choice.index === "anomaly" ? choice.lanes.map((lane) => laneStates(input, series, choice, lane)) : null;

  for (let t = 0; t < steps; t++) {
    // Grid row 0 of this step, were it read.
    const base = ((skipped + t) * nRow - first) * nLon;
    let shift = 0;
    for (let l = 0; l < planes.length; l++) {
      const { rows, reversals } = choice.lanes[l];
      const { source } = planes[l];
      let { states } = planes[l];
      if (persistent !== null) {
        const { states: all, from: start } = persistent[l];
        const at = (from - series.times[0] + t - start) * states.length;
        states = all.subarray(at, at + states.length);
      } else if (reversals !== null) {
        const index = choice.index === "one-dimensional" ? oneDimensionalStates : twoDimensionalStates;
        index(data, base, nLon, reversals, choice, planes[l]);
      }
      const found = finder.find(states, rows.length);
      const into = runs.room(RUN * found.count);
      runs.array.set(found.runs.subarray(0, RUN * found.count), into);
      const blocksInto = blocks.room(FIELDS * found.blocks);
      summaries.write(found, source, data, base, blocks.array, blocksInto);
      runCounts[t * planes.length + l] = found.count;
      blockCounts[t * planes.length + l] = found.blocks;
      unknown.add(t, shift, states);
      shift += states.length;
    }
  }
  const part = { runs: runs.done(), blocks: blocks.done(), runCounts, blockCounts };
  return unknown.bits === null ? part : { ...part, unknown: unknown.bits };
}

function laneStates(input: ChunkInput, series: Series, choice: BlockChoice, lane: Lane) {
  const { data, shape } = input.slabs.field;
  const departures = {
    field: data,
    background: input.backgrounds.field,
    nRow: shape[2],
    first: choice.rows[0],
    nLon: series.grid.lon.length,
  };
  const steps = [input.loaded[0] - series.times[0], input.loaded[1] - series.times[0]] as const;
  return persistentStates(departures, series.grid.lat, lane, choice, recordPieces(series), steps);
}
