import type { ChunkInput, ChunkPart, Series } from "../entry.ts";
import { rowCoefficients } from "./coefficients.ts";
import { amplitudeParts } from "./wave-amplitudes.ts";
import { WaveFrame } from "./wave-frame.ts";
import { bandWeights, type WaveChoice } from "./wave-options.ts";

/** Rows of each step and level joined to one, by area weight; a missing value in any row is missing in the mean. */
function bandMean(x: Float64Array, steps: number, nRows: number, nLon: number, weights: Float64Array): Float64Array {
  const out = new Float64Array(steps * nLon);
  for (let s = 0; s < steps; s++) {
    for (let r = 0; r < nRows; r++) {
      const w = weights[r] as number;
      const from = (s * nRows + r) * nLon;
      const into = s * nLon;
      for (let i = 0; i < nLon; i++) out[into + i] = (out[into + i] as number) + w * (x[from + i] as number);
    }
  }
  return out;
}

function difference(x: Float64Array, y: Float64Array): Float64Array {
  const out = new Float64Array(x.length);
  for (let i = 0; i < out.length; i++) out[i] = (x[i] as number) - (y[i] as number);
  return out;
}

/** Coefficients, and what is made from whole rows, of the chunk's own steps. */
export function waveChunk(input: ChunkInput, series: Series, choice: WaveChoice): ChunkPart {
  const { lat, lon } = series.grid;
  const nLon = lon.length;
  const slab = input.slabs.field;
  const [, nLevel, nRowsRead] = slab?.shape ?? [0, 0, 0, 0];
  const perStep = nLevel * nRowsRead * nLon;
  const skip = (input.times[0] - input.loaded[0]) * perStep;
  const size = (input.times[1] - input.times[0]) * perStep;
  const own = (array: Float64Array): Float64Array => array.subarray(skip, skip + size);
  const field = own(slab?.data ?? new Float64Array(0));
  const given = input.backgrounds.field;
  const background = given === undefined ? undefined : own(given);
  const steps = size / (nRowsRead * nLon);

  // Rows that the results speak of. A plan with a point may read more rows than the band has.
  const readFrom = planRows(choice)[0];
  const pick = (array: Float64Array): Float64Array => {
    const bandRows = choice.rows[1] - choice.rows[0];
    if (bandRows === nRowsRead) return array;
    const out = new Float64Array(steps * bandRows * nLon);
    for (let s = 0; s < steps; s++) {
      const from = (s * nRowsRead + choice.rows[0] - readFrom) * nLon;
      out.set(array.subarray(from, from + bandRows * nLon), s * bandRows * nLon);
    }
    return out;
  };
  const nRows = choice.rows[1] - choice.rows[0];
  const joined = (array: Float64Array): Float64Array =>
    choice.band !== null && choice.coherent
      ? bandMean(array, steps, nRows, nLon, bandWeights(lat, choice.rows))
      : array;
  const x = joined(pick(field));
  const clim = background === undefined ? undefined : joined(pick(background));
  const subject = choice.ofAnomaly && clim !== undefined ? difference(x, clim) : x;
  const { c, variance } = rowCoefficients(subject, lon, choice.most);
  const part: Record<string, ChunkPart[string]> = { variance };
  const isEach = choice.band === null || choice.coherent;
  if (!isEach || choice.reconstruct !== null || clim !== undefined) part.c = c;
  if (isEach) {
    const frame = new WaveFrame(series, choice);
    const firstRow = (input.times[0] - series.times[0]) * frame.nLevel * frame.nRow;
    Object.assign(part, amplitudeParts(frame, { c, variance }, firstRow));
  }
  if (clim !== undefined) {
    part.background = rowCoefficients(clim, lon, choice.most).c;
    if (!choice.ofAnomaly) part.anomaly = rowCoefficients(difference(x, clim), lon, choice.most).c;
  }
  if (choice.point !== null) {
    const row = choice.point.row - readFrom;
    const rows = new Float64Array(steps * nLon);
    const values = choice.ofAnomaly && background !== undefined ? difference(field, background) : field;
    const at = new Float64Array(steps);
    for (let s = 0; s < steps; s++) {
      const from = (s * nRowsRead + row) * nLon;
      rows.set(values.subarray(from, from + nLon), s * nLon);
      at[s] = values[from + choice.point.column] as number;
    }
    part.pointC = rowCoefficients(rows, lon, choice.waves[1]).c;
    part.pointValue = at;
  }
  return part;
}

/** Rows to read: the band's, and the point's. */
export function planRows(choice: WaveChoice): readonly [number, number] {
  if (choice.point === null) return choice.rows;
  const { row } = choice.point;
  return [Math.min(row, choice.rows[0]), Math.max(row + 1, choice.rows[1])];
}
