import { DataError } from "../../errors.ts";
import type { Slab } from "../../field/slab.ts";
import type { FieldDescription, SlabRequest } from "../dataset.ts";
import type { StoredVariable, VariableStore } from "../variable-store.ts";
import { type Decoding, decodedNumbers } from "./decoding.ts";
import type { FieldLayout } from "./field-layout.ts";

/** A field of an open file with all that reading it takes. */
export interface ReadableField {
  readonly description: FieldDescription;
  readonly variable: StoredVariable;
  readonly layout: FieldLayout;
  /** Packing and units in one: value in the core = stored · scale + offset. */
  readonly decoding: Decoding;
}

/** Consecutive runs of a list of indices, so that neighbours are read together. */
function runsOfIndices(indices: readonly number[]): { from: number; count: number; into: number }[] {
  const runs: { from: number; count: number; into: number }[] = [];
  indices.forEach((index, into) => {
    const last = runs.at(-1);
    if (last !== undefined && index === last.from + last.count) last.count += 1;
    else runs.push({ from: index, count: 1, into });
  });
  return runs;
}

function checkRequest(field: ReadableField, request: SlabRequest, nTime: number, nLevel: number, nLat: number): void {
  const range = ([from, to]: readonly [number, number], size: number) =>
    Number.isInteger(from) && Number.isInteger(to) && from >= 0 && from < to && to <= size;
  // A field without levels has nothing to choose from; a list for it is ignored.
  const levels = field.description.levels === null ? [] : (request.levels ?? [0]);
  const nMember = field.description.members?.length ?? 1;
  const member = request.member ?? 0;
  if (!(Number.isInteger(member) && member >= 0 && member < nMember))
    throw new DataError("ShapeError", `${field.description.key} has no member number ${member}; it has ${nMember}.`);
  if (
    !range(request.times, nTime) ||
    !range(request.rows ?? [0, nLat], nLat) ||
    (field.description.levels !== null && levels.length === 0) ||
    levels.some((level) => !(Number.isInteger(level) && level >= 0 && level < nLevel))
  )
    throw new DataError(
      "ShapeError",
      `${field.description.key}: steps ${request.times}, levels ${levels}, rows ${request.rows ?? "all"} are not inside its ${nTime} steps, ${nLevel} levels, ${nLat} rows.`,
    );
}

/**
 * Read a slab and bring it into the core's order and units.
 *
 * @throws ShapeError for a request outside the field; FormatError from the file.
 */
export async function fieldSlab(store: VariableStore, field: ReadableField, request: SlabRequest): Promise<Slab> {
  const { variable, layout, description } = field;
  const { stepDim, levelDim, latDim, lonDim } = layout;
  const nLon = layout.columns.values.length;
  const nLatAll = layout.rows.values.length;
  const nLevelAll = description.levels?.length ?? 1;
  checkRequest(field, request, description.steps.values.length, nLevelAll, nLatAll);
  const [t0, t1] = request.times;
  const member = request.member ?? 0;
  const [r0, r1] = request.rows ?? [0, nLatAll];
  const levels = levelDim < 0 ? [0] : (request.levels ?? Array.from({ length: nLevelAll }, (_, i) => i));
  const nTime = t1 - t0;
  const nLat = r1 - r0;
  const nLevel = levels.length;
  const firstRow = Math.min(layout.rows.first + layout.rows.step * r0, layout.rows.first + layout.rows.step * (r1 - 1));
  const firstColumn = layout.columns.step === 1 ? 0 : layout.columns.first - (nLon - 1);
  let out: Float64Array | null = null;
  for (const run of runsOfIndices(levels)) {
    const start = variable.shape.map(() => 0);
    const count = variable.shape.map(() => 1);
    const along = (dim: number, from: number, n: number) => {
      if (dim < 0) return;
      start[dim] = from;
      count[dim] = n;
    };
    along(stepDim, t0, nTime);
    along(layout.memberDim, member, 1);
    along(layout.startDim, layout.startIndex, 1);
    along(levelDim, run.from, run.count);
    along(latDim, firstRow, nLat);
    along(lonDim, firstColumn, nLon);
    const into = run.count === nLevel ? request.into : undefined;
    const stored = await decodedNumbers(store, variable.name, start, count, field.decoding, into);
    const stride = (dim: number) => (dim < 0 ? 0 : count.slice(dim + 1).reduce((product, n) => product * n, 1));
    const inOrder =
      run.count === nLevel &&
      layout.rows.step === 1 &&
      layout.columns.step === 1 &&
      stride(lonDim) === 1 &&
      stride(latDim) === nLon &&
      (levelDim < 0 || nLevel === 1 || stride(levelDim) === nLon * nLat) &&
      (stepDim < 0 || nTime === 1 || stride(stepDim) === nLon * nLat * nLevel);
    if (inOrder)
      return {
        quantity: description.quantity,
        units: description.units,
        data: stored,
        shape: [nTime, nLevel, nLat, nLon],
      };
    out ??= new Float64Array(nTime * nLevel * nLat * nLon);
    const [timeStride, levelStride, rowStride, columnStride] = [stepDim, levelDim, latDim, lonDim].map(stride) as [
      number,
      number,
      number,
      number,
    ];
    const columnStep = columnStride * layout.columns.step;
    const columnStart = layout.columns.step === 1 ? 0 : (nLon - 1) * columnStride;
    for (let t = 0; t < nTime; t++) {
      for (let l = 0; l < run.count; l++) {
        for (let r = 0; r < nLat; r++) {
          const row = layout.rows.step === 1 ? r : nLat - 1 - r;
          let from = t * timeStride + l * levelStride + row * rowStride + columnStart;
          let into = ((t * nLevel + run.into + l) * nLat + r) * nLon;
          if (columnStep === 1) {
            out.set(stored.subarray(from, from + nLon), into);
            continue;
          }
          for (let c = 0; c < nLon; c++, from += columnStep) out[into++] = stored[from] as number;
        }
      }
    }
  }
  return {
    quantity: description.quantity,
    units: description.units,
    data: out as Float64Array,
    shape: [nTime, nLevel, nLat, nLon],
  };
}
