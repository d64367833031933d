import { DataError } from "../../errors.ts";
import type { IndexRange } from "../../field/axes.ts";
import { requireCircle } from "../../grid/circle.ts";
import { nearestColumn, rowsOfBand, rowWeights } from "../../grid/rows.ts";
import type { OptionValues, Series } from "../entry.ts";

/** The options of zonal-waves, typed, with what follows from them. */
export interface WaveChoice {
  /** [first, last] wavenumber of the results. */
  readonly waves: readonly [number, number];
  /** Waves that a chunk keeps: 0 … most. */
  readonly most: number;
  readonly rows: IndexRange;
  /** Degrees north; null = row by row over the whole grid. */
  readonly band: readonly [number, number] | null;
  readonly coherent: boolean;
  readonly ofAnomaly: boolean;
  /** Rows of a result: 1 for a band. */
  readonly nRows: number;
  /** Latitude that stands for each result row. */
  readonly latitudes: Float64Array;
  readonly floor: number;
  readonly driftDays: number;
  readonly reconstruct: readonly number[] | null;
  readonly point: PointChoice | null;
}

/** The grid point at which shares are told. */
export interface PointChoice {
  readonly row: number;
  readonly column: number;
}

/** @throws OptionError or GridError in words where the grid or the series cannot serve the options. */
export function waveChoice(series: Series, options: OptionValues): WaveChoice {
  const { grid } = series;
  requireCircle(grid, "Zonal waves");
  const nyquist = Math.floor(grid.lon.length / 2);
  const [first, last] = options.waves as readonly [number, number];
  if (first > nyquist)
    throw new DataError(
      "OptionError",
      `waves: ${grid.lon.length} columns carry waves 1 to ${nyquist}; ${first} to ${last} were asked for.`,
    );
  const waves = [first, Math.min(last, nyquist)] as const;
  const band = options.band as readonly [number, number] | null;
  const ofAnomaly = options.of === "anomaly";
  if (ofAnomaly && series.background.kind === "none")
    throw new DataError(
      "OptionError",
      `of: "anomaly" needs a background to depart from. State one in the recipe, or use "field".`,
    );
  const reconstruct = options.reconstruct as readonly number[] | null;
  if (reconstruct?.length === 0)
    throw new DataError("OptionError", "reconstruct: the list names no wave. List some, or leave the option out.");
  const beyond = reconstruct?.find((k) => k > nyquist);
  if (beyond !== undefined)
    throw new DataError(
      "OptionError",
      `reconstruct: wave ${beyond} is beyond the ${nyquist} waves that ${grid.lon.length} columns carry.`,
    );
  const rows: IndexRange = band === null ? [0, grid.lat.length] : rowsOfBand(grid.lat, band);
  const latitudes = band === null ? grid.lat.slice() : Float64Array.of(bandLatitude(grid.lat, band, rows));
  const coherent = options.average !== "incoherent";
  if (!coherent && reconstruct !== null && band !== null)
    throw new DataError(
      "OptionError",
      "reconstruct: an incoherent mean of amplitudes has no phase to be put together from. Use the coherent mean, or no band.",
    );
  return {
    waves,
    most: Math.max(waves[1], ...(reconstruct ?? [0])),
    rows,
    band,
    coherent,
    ofAnomaly,
    nRows: band === null ? grid.lat.length : 1,
    latitudes,
    floor: options.amplitude_floor as number,
    driftDays: options.drift_days as number,
    reconstruct,
    point: pointChoice(series, options.point as readonly number[] | null),
  };
}

function pointChoice({ grid }: Series, point: readonly number[] | null): PointChoice | null {
  if (point === null) return null;
  const [latitude = Number.NaN, longitude = Number.NaN] = point;
  if (point.length !== 2 || !(Math.abs(latitude) <= 90))
    throw new DataError("OptionError", `point: [${point}] is not a latitude and a longitude in degrees.`);
  return { row: rowsOfBand(grid.lat, [latitude, latitude])[0], column: nearestColumn(grid.lon, longitude) };
}

/** The row itself where a single latitude was asked for, else the band's centre. */
function bandLatitude(lat: Float64Array, band: readonly [number, number], rows: IndexRange): number {
  return band[0] === band[1] ? (lat[rows[0]] as number) : (band[0] + band[1]) / 2;
}

/** Area weights of the band's rows, their sum 1. */
export function bandWeights(lat: Float64Array, rows: IndexRange): Float64Array {
  const weights = rowWeights(lat).slice(rows[0], rows[1]);
  const sum = weights.reduce((total, w) => total + w, 0);
  return weights.map((w) => w / sum);
}
