import type { Coordinate, ResultVariable, Series } from "../entry.ts";
import { bandWeights, type WaveChoice } from "./wave-options.ts";

/** Over this many numbers a variable of every row and step is kept as float32: seven digits are more than any file's packing holds. */
const MOST_DOUBLE = 1_000_000;

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

  constructor(series: Series, choice: WaveChoice) {
    this.series = series;
    this.choice = choice;
    this.nTime = series.times[1] - series.times[0];
    this.nLevel = series.levels?.length ?? 1;
    this.nRow = choice.nRows;
    this.waves = Array.from({ length: choice.waves[1] - choice.waves[0] + 1 }, (_, i) => choice.waves[0] + i);
    this.rowDim = choice.band === null ? "latitude" : "band";
    this.nLon = series.grid.lon.length;
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
    return size > MOST_DOUBLE ? new Float32Array(size) : new Float64Array(size);
  }

  variable(
    name: string,
    title: string,
    units: string,
    dims: readonly string[],
    data: Float64Array | Float32Array,
    reasons?: Uint8Array,
  ): ResultVariable {
    const plain = reasons === undefined || reasons.every((code) => code === 0);
    return { name, title, units, dims: this.dims(dims), shape: this.shape(dims), data, ...(plain ? {} : { reasons }) };
  }

  /** Normalised area weights of the band's rows. */
  get weights(): Float64Array {
    return bandWeights(this.series.grid.lat, this.choice.rows);
  }
}
