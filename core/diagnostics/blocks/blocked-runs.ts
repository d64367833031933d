import { BLOCKED } from "./reversal.ts";

/** Numbers of a run in `BlockedRuns.runs`: row of the lane, first column, column after the last, block or −1. */
export const RUN = 4;

/** Blocked cells of one hemisphere at one step: stretches of columns, and which of them hang together. */
export interface BlockedRuns {
  /** `count` runs, RUN numbers each, row by row, west to east; a run never crosses the grid's seam. */
  readonly runs: Int32Array;
  readonly count: number;
  /** Blocks of at least the asked width, numbered in the order in which their first cell is met. */
  readonly blocks: number;
}

/** Scratch that grows, so that no step allocates. */
export class RunFinder {
  readonly #nLon: number;
  readonly #leastColumns: number;
  #runs = new Int32Array(RUN * 64);
  #parent = new Int32Array(64);
  #number = new Int32Array(64);
  #next = new Int32Array(64);
  readonly #seen: Int32Array;
  #stamp = 0;

  constructor(nLon: number, leastColumns: number) {
    this.#nLon = nLon;
    this.#leastColumns = leastColumns;
    this.#seen = new Int32Array(nLon);
  }

  #grow(): void {
    const size = 2 * this.#parent.length;
    const grown = (array: Int32Array, length: number): Int32Array<ArrayBuffer> => {
      const out = new Int32Array(length);
      out.set(array);
      return out;
    };
    this.#runs = grown(this.#runs, RUN * size);
    this.#parent = grown(this.#parent, size);
    this.#number = grown(this.#number, size);
    this.#next = grown(this.#next, size);
  }

  #root(run: number): number {
    const parent = this.#parent;
    let at = run;
    while (parent[at] !== at) {
      parent[at] = parent[parent[at]];
      at = parent[at];
    }
    return at;
  }

  /** The earlier run is the root, so that blocks are numbered by their first cell. */
  #join(a: number, b: number): void {
    const rootA = this.#root(a);
    const rootB = this.#root(b);
    if (rootA < rootB) this.#parent[rootB] = rootA;
    else this.#parent[rootA] = rootB;
  }

  /** Stretches of blocked columns, row by row, joined to those that touch them, corners included and round the circle. */
  #scan(states: Uint8Array, nRow: number): number {
    const nLon = this.#nLon;
    let count = 0;
    let above = 0;
    for (let j = 0; j < nRow; j++) {
      const start = count;
      const base = j * nLon;
      let i = 0;
      while (i < nLon) {
        if (states[base + i] !== BLOCKED) {
          i += 1;
          continue;
        }
        const from = i;
        while (i < nLon && states[base + i] === BLOCKED) i += 1;
        if (count === this.#parent.length) this.#grow();
        const runs = this.#runs;
        runs[RUN * count] = j;
        runs[RUN * count + 1] = from;
        runs[RUN * count + 2] = i;
        this.#parent[count] = count;
        count += 1;
      }
      this.#joinRow(start, count);
      this.#joinRows(above, start, count);
      above = start;
    }
    return count;
  }

  #joinRow(start: number, end: number): void {
    const runs = this.#runs;
    if (end - start > 1 && runs[RUN * start + 1] === 0 && runs[RUN * (end - 1) + 2] === this.#nLon)
      this.#join(start, end - 1);
  }

  /** Join the runs [start, end) of a row to those, [above, start), of the row scanned before, which may be empty. */
  #joinRows(above: number, start: number, end: number): void {
    if (above === start || start === end) return;
    const runs = this.#runs;
    let a = above;
    let b = start;
    while (a < start && b < end) {
      // 8-connected: a run reaches one column beyond either end.
      if (runs[RUN * a + 1] <= runs[RUN * b + 2] && runs[RUN * b + 1] <= runs[RUN * a + 2]) this.#join(a, b);
      if (runs[RUN * a + 2] < runs[RUN * b + 2]) a += 1;
      else b += 1;
    }
    const nLon = this.#nLon;
    if (runs[RUN * above + 1] === 0 && runs[RUN * (end - 1) + 2] === nLon) this.#join(above, end - 1);
    if (runs[RUN * start + 1] === 0 && runs[RUN * (start - 1) + 2] === nLon) this.#join(start, start - 1);
  }

  /**
   * The blocks of one plane. The arrays are the finder's own, good until its next call.
   *
   * @param states Shape (nRow, nLon).
   */
  find(states: Uint8Array, nRow: number): BlockedRuns {
    const count = this.#scan(states, nRow);
    const runs = this.#runs;
    // Runs of a block as a chain from its root, to count the columns of each.
    const next = this.#next;
    const number = this.#number;
    for (let r = count - 1; r >= 0; r--) next[r] = -1;
    for (let r = count - 1; r >= 0; r--) {
      const root = this.#root(r);
      if (root !== r) {
        next[r] = next[root];
        next[root] = r;
      }
    }
    let blocks = 0;
    for (let r = 0; r < count; r++) {
      const root = this.#root(r);
      if (root === r) number[r] = this.#columns(r) >= this.#leastColumns ? blocks++ : -1;
      runs[RUN * r + 3] = number[root];
    }
    return { runs, count, blocks };
  }

  /** Different columns that a block has. */
  #columns(root: number): number {
    this.#stamp += 1;
    const seen = this.#seen;
    let columns = 0;
    for (let r = root; r >= 0; r = this.#next[r])
      for (let i = this.#runs[RUN * r + 1]; i < this.#runs[RUN * r + 2]; i++)
        if (seen[i] !== this.#stamp) {
          seen[i] = this.#stamp;
          columns += 1;
        }
    return columns;
  }
}
