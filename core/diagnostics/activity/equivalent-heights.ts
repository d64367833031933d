/** Share of the hemisphere: areas nearer to each other than this are the same; the smallest cell of a 0.25° grid has 2e-9. */
const SAME_AREA = 1e-11;
/** Longer stretches are sorted by the engine's own sort. */
const LONGEST_INSERTION = 48;

/**
 * Heights by the area below them: Ze of each row, so that the air below Ze has the area of the cap beyond the row.
 *
 * Cells are put in the order of their heights; the area of the cap is walked off from the lowest. Where it ends between two
 * cells, Ze is their mean. The row itself counts half to the cap.
 *
 * Cells are dealt into as many bins as there are cells, and only the bins in which a cap ends are sorted.
 */
export class EquivalentHeights {
  readonly #weights: Float64Array;
  readonly #nLon: number;
  readonly #targets: Float64Array;
  readonly #bin: Int32Array;
  readonly #binStart: Int32Array;
  readonly #binArea: Float64Array;
  readonly #z: Float64Array;
  readonly #area: Float64Array;
  readonly #sorted: Uint8Array;

  /**
   * @param weights Of each row, equator to pole; they sum to 1.
   */
  constructor(weights: Float64Array, nLon: number) {
    const n = weights.length * nLon;
    this.#weights = weights;
    this.#nLon = nLon;
    this.#targets = new Float64Array(weights.length);
    let beyond = 0;
    for (let j = weights.length - 1; j >= 0; j--) {
      this.#targets[j] = beyond + weights[j] / 2;
      beyond += weights[j];
    }
    this.#bin = new Int32Array(n);
    this.#binStart = new Int32Array(n + 1);
    this.#binArea = new Float64Array(n);
    this.#z = new Float64Array(n);
    this.#area = new Float64Array(n);
    this.#sorted = new Uint8Array(n);
  }

  /**
   * @param z   Heights, shape (rows, nLon), equator to pole; none missing.
   * @param out Takes Ze of each row.
   */
  write(z: Float64Array, out: Float64Array): void {
    let least = Number.POSITIVE_INFINITY;
    let most = Number.NEGATIVE_INFINITY;
    for (let i = 0; i < z.length; i++) {
      if (z[i] < least) least = z[i];
      if (z[i] > most) most = z[i];
    }
    if (!(most > least)) {
      out.fill(least);
      return;
    }
    this.#deal(z, least, (z.length - 1) / (most - least));
    let bin = 0;
    let below = 0; // area of the bins before
    for (let j = out.length - 1; j >= 0; j--) {
      const target = this.#targets[j];
      while (bin + 1 < z.length && below + this.#binArea[bin] < target - SAME_AREA) {
        below += this.#binArea[bin];
        bin += 1;
      }
      out[j] = this.#heightAt(bin, below, target);
    }
  }

  /** Counting sort by bin. */
  #deal(z: Float64Array, least: number, scale: number): void {
    const bins = this.#bin;
    const start = this.#binStart;
    const nLon = this.#nLon;
    start.fill(0);
    this.#binArea.fill(0);
    this.#sorted.fill(0);
    for (let j = 0, i = 0; j < this.#weights.length; j++) {
      const area = this.#weights[j] / nLon;
      for (let k = 0; k < nLon; k++, i++) {
        const bin = Math.floor((z[i] - least) * scale);
        bins[i] = bin;
        start[bin] += 1;
        this.#binArea[bin] += area;
      }
    }
    let sum = 0;
    for (let b = 0; b < start.length; b++) {
      sum += start[b];
      start[b] = sum;
    }
    // From behind, so that `start` ends up as the first place of each bin.
    for (let j = this.#weights.length - 1, i = z.length - 1; j >= 0; j--) {
      const area = this.#weights[j] / nLon;
      for (let k = 0; k < nLon; k++, i--) {
        start[bins[i]] -= 1;
        this.#z[start[bins[i]]] = z[i];
        this.#area[start[bins[i]]] = area;
      }
    }
  }

  /** The height at which `target` is walked off, `below` having been before the bin. */
  #heightAt(bin: number, below: number, target: number): number {
    this.#sort(bin);
    const end = this.#binStart[bin + 1];
    let area = below;
    for (let i = this.#binStart[bin]; i < end; i++) {
      area += this.#area[i];
      if (area < target - SAME_AREA) continue;
      if (area > target + SAME_AREA) return this.#z[i];
      // The cap ends between this cell and the next.
      if (i + 1 < end) return (this.#z[i] + this.#z[i + 1]) / 2;
      let next = bin + 1;
      while (next < this.#z.length && this.#binStart[next + 1] === this.#binStart[next]) next += 1;
      if (next === this.#z.length) return this.#z[i];
      this.#sort(next);
      return (this.#z[i] + this.#z[this.#binStart[next]]) / 2;
    }
    // Rounding left the last cap a hair beyond the last cell.
    return this.#z[Math.max(0, end - 1)];
  }

  #sort(bin: number): void {
    if (this.#sorted[bin] === 1) return;
    this.#sorted[bin] = 1;
    const from = this.#binStart[bin];
    const to = this.#binStart[bin + 1];
    const z = this.#z;
    const area = this.#area;
    if (to - from > LONGEST_INSERTION) {
      const order = Array.from({ length: to - from }, (_, i) => from + i).sort((a, b) => z[a] - z[b]);
      const heights = order.map((i) => z[i]);
      const areas = order.map((i) => area[i]);
      z.set(heights, from);
      area.set(areas, from);
      return;
    }
    for (let i = from + 1; i < to; i++) {
      const height = z[i];
      const own = area[i];
      let at = i;
      while (at > from && z[at - 1] > height) {
        z[at] = z[at - 1];
        area[at] = area[at - 1];
        at -= 1;
      }
      z[at] = height;
      area[at] = own;
    }
  }
}
