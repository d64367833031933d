import { backgroundAt } from "../background/background.ts";
import type { FittedBackground } from "../background/fit.ts";
import { runningMean, runningMeanHalo } from "../background/running-mean.ts";
import type { BackgroundSpec } from "../background/spec.ts";
import type { IndexRange } from "../field/axes.ts";
import type { Slab } from "../field/slab.ts";
import type { FieldDescription, FieldReader } from "../formats/dataset.ts";

const WIDEST_VALUES = 1 << 22; // 32 MB of 64-bit numbers

export interface SlabAndBackground {
  readonly slab: Slab;
  /** On the slab's shape; null where there is no background, or it is not fitted. */
  readonly background: Float64Array | null;
}

interface WholeRequest {
  readonly times: IndexRange;
  /** null on a field without levels. */
  readonly levels: readonly number[] | null;
  readonly rows: IndexRange;
  /** Memory that the slab may use. */
  readonly into?: Float64Array | undefined;
}

/** The range with `halo` more on either side, within `size`. */
export function widened([from, to]: IndexRange, halo: number, size: number): IndexRange {
  return [Math.max(0, from - halo), Math.min(size, to + halo)];
}

/**
 * Read a slab and the background on it.
 *
 * @param read   Of the field.
 * @param fitted Of these rows at least, and these levels; absent for a running mean, which is made from the steps around.
 * @throws What reading throws.
 */
export async function slabWithBackground(
  read: FieldReader,
  field: FieldDescription,
  request: WholeRequest,
  spec: BackgroundSpec,
  fitted: FittedBackground | undefined,
): Promise<SlabAndBackground> {
  const { times, rows } = request;
  const levels = request.levels === null ? {} : { levels: request.levels };
  if (spec.kind !== "running-mean") {
    const slab = await read({ times, rows, into: request.into, ...levels });
    return { slab, background: fitted === undefined ? null : backgroundAt(fitted, field.steps, times, rows) };
  }
  return runningSlab(read, field, request, spec);
}

/** Several rows at a time: the steps around a long window can be many times the slab itself. */
async function runningSlab(
  read: FieldReader,
  field: FieldDescription,
  request: WholeRequest,
  spec: BackgroundSpec,
): Promise<SlabAndBackground> {
  const { times, rows, levels } = request;
  const nLon = field.grid.lon.length;
  const nLevel = levels?.length ?? 1;
  const nRow = rows[1] - rows[0];
  const wide = widened(times, runningMeanHalo(spec, field.steps), field.steps.values.length);
  const each = Math.max(1, Math.floor(WIDEST_VALUES / ((wide[1] - wide[0]) * nLevel * nLon)));
  const planes = (times[1] - times[0]) * nLevel;
  const data = new Float64Array(planes * nRow * nLon);
  const background = new Float64Array(data.length);
  for (let from = rows[0]; from < rows[1]; from += each) {
    const block: IndexRange = [from, Math.min(rows[1], from + each)];
    const around = await read({ times: wide, rows: block, ...(levels === null ? {} : { levels }) });
    const means = runningMean(around, field.steps, wide, times, spec);
    const size = (block[1] - block[0]) * nLon;
    const skipped = (times[0] - wide[0]) * nLevel * size;
    for (let plane = 0; plane < planes; plane++) {
      const into = (plane * nRow + from - rows[0]) * nLon;
      data.set(around.data.subarray(skipped + plane * size, skipped + (plane + 1) * size), into);
      background.set(means.subarray(plane * size, (plane + 1) * size), into);
    }
  }
  const shape = [times[1] - times[0], nLevel, nRow, nLon] as const;
  return { slab: { quantity: field.quantity, units: field.units, data, shape }, background };
}
