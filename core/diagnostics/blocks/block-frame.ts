import { runningMeanHalo } from "../../background/running-mean.ts";
import { reasonCode } from "../../field/reasons.ts";
import type { Coordinate, ResultVariable, Series } from "../entry.ts";
import type { BlockChoice } from "./block-choice.ts";
import { timeCoordinate } from "./time-coordinate.ts";

const MISSING = reasonCode("missing");
const EDGE = reasonCode("edge");

/** Cells of all hemispheres as the results have them: rows south → north, or, in one dimension, the northern hemisphere first. */
export class BlockFrame {
  readonly series: Series;
  readonly choice: BlockChoice;
  readonly nTime: number;
  readonly nLon: number;
  readonly nRow: number;
  /** Dims of a step's cells, and their sizes. */
  readonly dims: readonly string[];
  readonly shape: readonly number[];
  /** Result row of each row of each lane. */
  readonly #rowOf: readonly Int32Array[];
  readonly #latitudes: Float64Array;
  readonly #edge: number;

  constructor(series: Series, choice: BlockChoice) {
    this.series = series;
    this.choice = choice;
    this.nTime = series.times[1] - series.times[0];
    this.nLon = series.grid.lon.length;
    const { lanes } = choice;
    this.nRow = lanes.reduce((sum, { rows }) => sum + rows.length, 0);
    if (choice.index === "one-dimensional") {
      this.dims = lanes.length > 1 ? ["hemisphere", "longitude"] : ["longitude"];
      this.shape = lanes.length > 1 ? [lanes.length, this.nLon] : [this.nLon];
      this.#rowOf = lanes.map((_, lane) => Int32Array.of(lane));
    } else {
      this.dims = ["latitude", "longitude"];
      this.shape = [this.nRow, this.nLon];
      const order = lanes.flatMap(({ rows }) => Array.from(rows)).sort((a, b) => a - b);
      this.#rowOf = lanes.map(({ rows }) => rows.map((row) => order.indexOf(row)));
    }
    this.#latitudes = new Float64Array(this.nRow);
    lanes.forEach(({ rows }, lane) => {
      rows.forEach((row, j) => {
        this.#latitudes[this.#rowOf[lane][j]] = series.grid.lat[row];
      });
    });
    this.#edge = choice.index === "anomaly" ? runningMeanHalo(series.background, series.steps) : 0;
  }

  /** Cells of a step. */
  get cells(): number {
    return this.nRow * this.nLon;
  }

  /** Where the first column of a lane's row stands among the cells of a step. */
  cellOf(lane: number, row: number): number {
    return this.#rowOf[lane][row] * this.nLon;
  }

  /** Why a cell of a step is unknown: its data are missing, or a running mean reaches beyond the record. */
  absence(t: number): number {
    const step = this.series.times[0] + t;
    return step < this.#edge || step + this.#edge >= this.series.steps.values.length ? EDGE : MISSING;
  }

  coordinates(): Coordinate[] {
    const { grid } = this.series;
    const time = timeCoordinate(this.series);
    const longitude: Coordinate = {
      name: "longitude",
      values: grid.lon.slice(),
      units: "degrees_east",
      attributes: { standard_name: "longitude" },
    };
    if (!this.dims.includes("latitude"))
      return this.choice.lanes.length > 1 ? [time, hemisphereCoordinate(), longitude] : [time, longitude];
    const latitude: Coordinate = {
      name: "latitude",
      values: this.#latitudes,
      units: "degrees_north",
      attributes: { standard_name: "latitude" },
    };
    return [time, latitude, longitude];
  }

  /** A variable on the cells, with a dimension before them or none. */
  variable(
    name: string,
    title: string,
    lead: readonly [dim: string, size: number] | null,
    data: ResultVariable["data"],
    reasons: Uint8Array | null,
  ): ResultVariable {
    return {
      name,
      title,
      units: "1",
      dims: [...(lead === null ? [] : [lead[0]]), ...this.dims],
      shape: [...(lead === null ? [] : [lead[1]]), ...this.shape],
      data,
      ...(reasons === null ? {} : { reasons }),
    };
  }
}

function hemisphereCoordinate(): Coordinate {
  return {
    name: "hemisphere",
    values: Float64Array.of(1, -1),
    units: "1",
    attributes: { long_name: "hemisphere: 1 northern, -1 southern" },
  };
}
