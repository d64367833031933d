import type { FittedBackground } from "../../core/background/fit.ts";
import type { BackgroundSpec } from "../../core/background/spec.ts";
import { DataError, throwIfCancelled } from "../../core/errors.ts";
import type { IndexRange } from "../../core/field/axes.ts";
import type { FieldDescription, FieldReader } from "../../core/formats/dataset.ts";
import { rowsOfBand, rowWeights } from "../../core/grid/rows.ts";
import { slabWithBackground } from "../../core/recipe/slab-background.ts";
import type { Ribbon } from "./desk.ts";
import type { Task } from "./tasks.ts";

const PIECE_VALUES = 1 << 18; // 2 MB as 64-bit numbers: frames asked for meanwhile wait no longer than such a piece takes

/**
 * Area-weighted mean over rows, for each step and column.
 *
 * @param data Shape (steps, rows, nLon), NaN missing: a column's mean is over the rows that are there.
 * @returns Shape (steps, nLon); NaN where no row is there.
 */
export function bandMeans(data: Float64Array, weights: Float64Array, nLon: number): Float32Array<ArrayBuffer> {
  const rows = weights.length;
  const steps = data.length / (rows * nLon);
  const means = new Float32Array(steps * nLon);
  for (let step = 0; step < steps; step++)
    for (let i = 0; i < nLon; i++) {
      let sum = 0;
      let weight = 0;
      for (let row = 0; row < rows; row++) {
        const value = data[(step * rows + row) * nLon + i];
        if (Number.isNaN(value)) continue;
        sum += weights[row] * value;
        weight += weights[row];
      }
      means[step * nLon + i] = weight > 0 ? sum / weight : Number.NaN;
    }
  return means;
}

/**
 * The longitude–time picture of a band, read piece by piece: only the band's rows, and those of its background.
 *
 * @param band Degrees north, both ends included; equal ends = the nearest row.
 * @throws GridError if the band holds no row; ShapeError for steps outside the record; Cancelled.
 */
export async function bandRibbon(
  read: FieldReader,
  field: FieldDescription,
  levels: readonly number[] | null,
  band: readonly [number, number],
  times: IndexRange,
  background: BackgroundSpec,
  fitted: FittedBackground | null,
  task: Task,
): Promise<Ribbon> {
  const [from, to] = times;
  if (!(from >= 0 && from < to && to <= field.steps.values.length))
    throw new DataError(
      "ShapeError",
      `${field.key} has no steps ${from} to ${to}; it has ${field.steps.values.length}.`,
    );
  const { lat, lon } = field.grid;
  const rows = rowsOfBand(lat, band);
  const weights = rowWeights(lat).slice(...rows);
  const values = new Float32Array((to - from) * lon.length);
  let means: Float32Array<ArrayBuffer> | null = null;
  const steps = Math.max(1, Math.floor(PIECE_VALUES / (weights.length * lon.length)));
  const started = Date.now();
  for (let at = from; at < to; at += steps) {
    throwIfCancelled(task.signal);
    const end = Math.min(to, at + steps);
    const request = { times: [at, end] as const, levels, rows };
    const both = await slabWithBackground(read, field, request, background, fitted ?? undefined);
    values.set(bandMeans(both.slab.data, weights, lon.length), (at - from) * lon.length);
    if (both.background !== null) {
      means ??= new Float32Array(values.length);
      means.set(bandMeans(both.background, weights, lon.length), (at - from) * lon.length);
    }
    const done = (end - from) / (to - from);
    task.report("Reading the ribbon", done, ((Date.now() - started) / 1000) * (1 / done - 1));
  }
  throwIfCancelled(task.signal);
  return { times, values, background: means };
}
