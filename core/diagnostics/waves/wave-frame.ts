import { runningMeanHalo } from "../../background/running-mean.ts";
import { reasonCode } from "../../field/reasons.ts";
import type { Coordinate, ResultVariable, Series } from "../entry.ts";
import { resultArray } from "../precision.ts";
import { bandWeights, type WaveChoice } from "./wave-options.ts";

const MISSING = reasonCode("missing");
const EDGE = reasonCode("edge");

/** A plain loop: a function called for each of millions of codes takes as long as the diagnostic. */
function hasReason(reasons: Uint8Array): boolean {
  for (let i = 0; i < reasons.length; i++) if (reasons[i] !== 0) return true;
  return false;
}

/** The axes on which the results of one run stand, and how variables on them are made. */
export class WaveFrame {
  readonly series: Series;
  readonly choice: WaveChoice;
  readonly nTime: number;
  readonly nLevel: number;
  readonly nRow: number;
  /** Wavenumbers of the results. */
  readonly waves: readonly number[];
  readonly rowDim: "latitude" | "band";
  readonly nLon: number;
  /** Steps at either end of the record where a running mean has no value. */
  readonly #edge: number;

  constructor(series: Series, choice: WaveChoice) {
    this.series = series;
    this.choice = choice;
    this.nTime = series.times[1] - series.times[0];
    this.nLevel = series.levels?.length ?? 1;
    this.nRow = choice.nRows;
    this.waves = Array.from({ length: choice.waves[1] - choice.waves[0] + 1 }, (_, i) => choice.waves[0] + i);
    this.rowDim = choice.band === null ? "latitude" : "band";
    this.nLon = series.grid.lon.length;
    this.#edge = runningMeanHalo(series.background, series.steps);
  }

  /** Steps of the result at which the background reaches beyond the record. */
  get edgeSteps(): number {
    let count = 0;
    for (let t = 0; t < this.nTime; t++) count += this.#isEdge(t) ? 1 : 0;
    return count;
  }

  #isEdge(t: number): boolean {
    const step = this.series.times[0] + t;
    return step < this.#edge || step + this.#edge >= this.series.steps.values.length;
  }

  /**
   * Reason code of a missing number.
   *
   * @param row              Counted over time, level and row.
   * @param needsBackground  Whether it was made from the background too.
   */
  absence(row: number, needsBackground: boolean, rowsPerStep = this.nLevel * this.nRow): number {
    return needsBackground && this.#isEdge(Math.floor(row / rowsPerStep)) ? EDGE : MISSING;
  }

  /** `days` of the steps in the result. */
  get days(): Float64Array {
    return this.series.steps.values.subarray(this.series.times[0], this.series.times[1]);
  }

  coordinates(): Coordinate[] {
    const { series, choice } = this;
    const { steps } = series;
    const time: Coordinate =
      steps.kind === "time"
        ? {
            name: "time",
            values: this.days.slice(),
            units: "days since 1970-01-01 00:00:00",
            attributes: { standard_name: "time", calendar: steps.calendar },
          }
        : { name: "time", values: this.days.slice(), units: "1", attributes: { long_name: steps.name } };
    const level: Coordinate[] =
      series.levels === null
        ? []
        : [
            {
              name: "level",
              values: series.levels,
              units: "hPa",
              attributes: { standard_name: "air_pressure", positive: "down" },
            },
          ];
    const bounds =
      choice.band === null ? undefined : `${choice.band[0]} to ${choice.band[1]} degrees_north, rows weighted by area`;
    const row: Coordinate = {
      name: this.rowDim,
      values: choice.latitudes,
      units: "degrees_north",
      attributes: { standard_name: "latitude", ...(bounds === undefined ? {} : { long_name: bounds }) },
    };
    const wave: Coordinate = {
      name: "wavenumber",
      values: Float64Array.from(this.waves),
      units: "1",
      attributes: { long_name: "zonal wavenumber" },
    };
    return [time, ...level, row, wave];
  }

  /** Dims with the level left out where there is none. */
  dims(names: readonly string[]): string[] {
    return names
      .filter((name) => name !== "level" || this.series.levels !== null)
      .map((name) => (name === "row" ? this.rowDim : name));
  }

  shape(names: readonly string[]): number[] {
    const sizes: Readonly<Record<string, number>> = {
      time: this.nTime,
      level: this.nLevel,
      row: this.nRow,
      wavenumber: this.waves.length,
      wave_or_rest: this.choice.waves[1] + 2,
      longitude: this.nLon,
    };
    return names.filter((name) => name !== "level" || this.series.levels !== null).map((name) => sizes[name] as number);
  }

  array(size: number): Float64Array | Float32Array {
    return resultArray(size);
  }

  variable(
    name: string,
    title: string,
    units: string,
    dims: readonly string[],
    data: Float64Array | Float32Array,
    reasons?: Uint8Array,
  ): ResultVariable {
    const plain = reasons === undefined || !hasReason(reasons);
    return { name, title, units, dims: this.dims(dims), shape: this.shape(dims), data, ...(plain ? {} : { reasons }) };
  }

  /** Normalised area weights of the band's rows. */
  get weights(): Float64Array {
    return bandWeights(this.series.grid.lat, this.choice.rows);
  }
}
