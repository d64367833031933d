import { EARTH_RADIUS, RADIANS_PER_DEGREE } from "../../constants.ts";
import { nearestRow, rowWeights } from "../../grid/rows.ts";
import type { Series } from "../entry.ts";
import type { BlockChoice } from "./block-choice.ts";
import { type BlockedRuns, RUN } from "./blocked-runs.ts";

/** Numbers that a step leaves of each of its blocks, in this order. */
export const SUMMARY = [
  "area",
  "width",
  "longitude",
  "latitude",
  "highest",
  "highest_longitude",
  "highest_latitude",
  "upstream",
  "downstream",
] as const;
export const FIELDS = SUMMARY.length;

export type BlockField = (typeof SUMMARY)[number];

/** Where a number stands among those of a block. */
export function fieldAt(name: BlockField): number {
  return SUMMARY.indexOf(name);
}

const SQUARE_KM = 1e-6; // per m²
/** A block all round the circle has no mean longitude: what is left of its unit vectors is rounding. */
const LEAST_RESULTANT = 1e-9;

/** Makes the numbers of blocks on one grid. */
export class BlockSummaries {
  readonly #choice: BlockChoice;
  readonly #lat: Float64Array;
  readonly #lon: Float64Array;
  readonly #cos: Float64Array;
  readonly #sin: Float64Array;
  /** Of one cell of each grid row. */
  readonly #area: Float64Array;
  readonly #seen: Int32Array;
  #stamp = 0;

  constructor(series: Series, choice: BlockChoice) {
    const { lat, lon } = series.grid;
    this.#choice = choice;
    this.#lat = lat;
    this.#lon = lon;
    this.#cos = lon.map((value) => Math.cos(value * RADIANS_PER_DEGREE));
    this.#sin = lon.map((value) => Math.sin(value * RADIANS_PER_DEGREE));
    const cell = EARTH_RADIUS * EARTH_RADIUS * SQUARE_KM * ((2 * Math.PI) / lon.length);
    this.#area = rowWeights(lat).map((weight) => weight * cell);
    this.#seen = new Int32Array(lon.length);
  }

  /**
   * The numbers of each block of a plane: area (km²), width (degrees of longitude), centroid (circular mean longitude and mean
   * latitude of the cells by area), highest height and where it is, and the lowest heights up and downstream within the
   * reach on the centroid's row (Wiedenmann et al. 2002).
   *
   * The one-dimensional index has no area, and its cells weigh alike.
   *
   * @param found  Of the plane.
   * @param source Grid row of each cell of the plane.
   * @param z      Heights; grid row r, column i at `base + r · nLon + i`.
   * @param out    Takes FIELDS numbers for each block, from `at` on.
   */
  write(found: BlockedRuns, source: Int32Array, z: Float64Array, base: number, out: Float64Array, at: number): void {
    for (let block = 0; block < found.blocks; block++)
      this.#writeOne(found, block, source, z, base, out, at + block * FIELDS);
  }

  #writeOne(
    { runs, count }: BlockedRuns,
    block: number,
    source: Int32Array,
    z: Float64Array,
    base: number,
    out: Float64Array,
    at: number,
  ): void {
    const nLon = this.#lon.length;
    const hasArea = this.#choice.index !== "one-dimensional";
    this.#stamp += 1;
    let area = 0;
    let columns = 0;
    let x = 0;
    let y = 0;
    let moment = 0;
    let highest = Number.NEGATIVE_INFINITY;
    let column = 0;
    let row = 0;
    for (let r = 0; r < count; r++) {
      if (runs[RUN * r + 3] !== block) continue;
      const cell = runs[RUN * r] * nLon;
      for (let i = runs[RUN * r + 1]; i < runs[RUN * r + 2]; i++) {
        const from = source[cell + i];
        const weight = hasArea ? this.#area[from] : 1;
        area += weight;
        x += weight * this.#cos[i];
        y += weight * this.#sin[i];
        moment += weight * this.#lat[from];
        const height = z[base + from * nLon + i];
        if (height > highest) {
          highest = height;
          column = i;
          row = from;
        }
        if (this.#seen[i] !== this.#stamp) {
          this.#seen[i] = this.#stamp;
          columns += 1;
        }
      }
    }
    const latitude = moment / area;
    const isRound = Math.sqrt(x * x + y * y) <= LEAST_RESULTANT * area;
    const longitude = isRound ? Number.NaN : Math.atan2(y, x) / RADIANS_PER_DEGREE;
    const centre = base + nearestRow(this.#lat, latitude) * nLon;
    out[at] = hasArea ? area : Number.NaN;
    out[at + 1] = (columns * 360) / nLon;
    out[at + 2] = longitude < 0 ? longitude + 360 : longitude;
    out[at + 3] = latitude;
    out[at + 4] = highest;
    out[at + 5] = ((this.#lon[column] % 360) + 360) % 360;
    out[at + 6] = this.#lat[row];
    out[at + 7] = this.#lowest(z, centre, longitude, -1);
    out[at + 8] = this.#lowest(z, centre, longitude, 1);
  }

  /** Lowest height on a row within the reach east (1) or west (−1) of the centre's column; NaN where one is missing. */
  #lowest(z: Float64Array, row: number, longitude: number, east: 1 | -1): number {
    const nLon = this.#lon.length;
    if (Number.isNaN(longitude)) return Number.NaN;
    const columns = ((longitude - this.#lon[0]) / 360) * nLon;
    // The nearest column; of two equally near, the western.
    const centre = Math.ceil(columns - 0.5 - 1e-9);
    let lowest = Number.POSITIVE_INFINITY;
    for (let d = 1; d <= this.#choice.reach; d++) {
      const i = (((centre + east * d) % nLon) + nLon) % nLon;
      const height = z[row + i];
      if (Number.isNaN(height)) return Number.NaN;
      if (height < lowest) lowest = height;
    }
    return lowest;
  }
}
