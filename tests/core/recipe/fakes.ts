import type { ChunkPart, Diagnostic, OptionSpec } from "../../../core/diagnostics/entry.ts";
import { DataError } from "../../../core/errors.ts";
import type { Grid, Levels, StepAxis } from "../../../core/field/axes.ts";
import type { Quantity } from "../../../core/field/quantity.ts";
import type { FieldDescription, FileContents, OpenFile } from "../../../core/formats/dataset.ts";

/** One option of every kind. */
export const EVERY_OPTION: readonly OptionSpec[] = [
  { name: "factor", title: "Factor", about: "Multiplies.", kind: "number", default: 1, min: -10, max: 10 },
  { name: "count", title: "Count", about: "A whole number.", kind: "integer", default: null, min: 1, max: 6 },
  { name: "band", title: "Band", about: "Rows.", units: "°N", kind: "range", default: null, min: -90, max: 90 },
  { name: "waves", title: "Waves", about: "k.", kind: "range", default: [1, 6], min: 1, max: 720, integer: true },
  { name: "points", title: "Points", about: "Longitudes.", kind: "list", default: null, min: -180, max: 360 },
  {
    name: "mean",
    title: "Mean",
    about: "How.",
    kind: "choice",
    default: "coherent",
    choices: [
      { value: "coherent", title: "Coherent" },
      { value: "incoherent", title: "Incoherent" },
    ],
  },
  { name: "deep", title: "Deep", about: "Whether.", kind: "boolean", default: false },
];

/**
 * Sum over each row of field · factor, minus the background where there is one, and its sum over the record: enough to
 * see that every number arrives once, in order. Fails on demand in any of its three parts.
 */
export const rowSums: Diagnostic = {
  id: "row-sums",
  title: "Row sums",
  summary: "Adds up rows.",
  formula: "<mi>s</mi>",
  validity: "Everywhere.",
  sources: ["Nobody 1900"],
  inputs: [{ name: "field", quantities: "any", about: "Any field" }],
  options: EVERY_OPTION,
  outputs: [{ name: "sum", title: "Sum", units: "input", dims: ["time", "latitude"], about: "Sums." }],
  plan(series, options) {
    if (options.factor === 9) throw new DataError("GridError", "nine is not planned");
    return {
      rows: [0, series.grid.lat.length],
      halo: (options.count as number | null) ?? 0,
      usesBackground: series.background.kind !== "none",
    };
  },
  chunk(input, series, options): ChunkPart {
    if (options.factor === 8 && input.times[0] > 0) throw new DataError("ShapeError", "eight fails on the way");
    const { data, shape } = input.slabs.field;
    const background = input.backgrounds.field;
    const [, nLevel, nLat, nLon] = shape;
    const steps = input.times[1] - input.times[0];
    const skipped = input.times[0] - input.loaded[0];
    const sums = new Float64Array(steps * nLevel * nLat);
    for (let row = 0; row < sums.length; row++)
      for (let i = 0; i < nLon; i++) {
        const at = (skipped * nLevel * nLat + row) * nLon + i;
        sums[row] += (data[at] - (background?.[at] ?? 0)) * (options.factor as number);
      }
    return { sums, loaded: Int32Array.from(input.loaded), shape: Int32Array.of(shape[0], series.levels?.length ?? 0) };
  },
  finish(parts, series, options) {
    if (options.factor === 7) throw new Error("seven does not finish");
    const nLat = series.grid.lat.length;
    const nLevel = series.levels?.length ?? 1;
    const steps = series.times[1] - series.times[0];
    const data = new Float64Array(steps * nLevel * nLat);
    let at = 0;
    for (const part of parts) {
      data.set(part.sums, at);
      at += part.sums.length;
    }
    return {
      coordinates: [
        {
          name: "time",
          values: series.steps.values.slice(...series.times),
          units: "days since 1970-01-01",
          attributes: { calendar: series.steps.calendar, standard_name: "time" },
        },
        { name: "level", values: series.levels ?? Float64Array.of(0), units: "hPa" },
        { name: "latitude", values: series.grid.lat, units: "degrees_north" },
      ],
      variables: [
        {
          name: "sum",
          title: "Sum",
          units: series.units,
          dims: ["time", "level", "latitude"],
          shape: [steps, nLevel, nLat],
          data,
          reasons: Uint8Array.from(data, (value) => (Number.isNaN(value) ? 1 : 0)),
        },
      ],
      notes: [`${parts.length} parts`],
    };
  },
};

export const FAKE_CATALOGUE: readonly Diagnostic[] = [rowSums, { ...rowSums, id: "row-drums", options: [] }];

export function evenGrid(nLat: number, nLon: number): Grid {
  return {
    lat: Float64Array.from({ length: nLat }, (_, j) => -90 + (180 * j) / (nLat - 1)),
    lon: Float64Array.from({ length: nLon }, (_, i) => (360 * i) / nLon),
    closesCircle: true,
  };
}

export interface FakeField {
  readonly variable: string;
  readonly quantity: Quantity | null;
  readonly levels: Levels;
  readonly grid: Grid;
  readonly steps: StepAxis;
}

export function dailySteps(count: number, first = 0): StepAxis {
  return {
    kind: "time",
    name: "time",
    values: Float64Array.from({ length: count }, (_, i) => first + i),
    calendar: "standard",
  };
}

/** Numbers that differ everywhere and are no round binary fractions. */
export function fakeValue(step: number, level: number, row: number, column: number): number {
  return 5000 + 300 * Math.sin(step * 1.7 + level) + 7.3 * row + Math.cos(column * (row + 1) + 0.1 * step);
}

const planes = new Map<string, Float64Array>();

/** All of `fakeValue` at one step and level; made once, for the tests read it often. */
function fakePlane(step: number, level: number, nLat: number, nLon: number): Float64Array {
  const key = `${step} ${level} ${nLat} ${nLon}`;
  let plane = planes.get(key);
  if (plane === undefined) {
    plane = Float64Array.from({ length: nLat * nLon }, (_, i) =>
      fakeValue(step, level, Math.floor(i / nLon), i % nLon),
    );
    planes.set(key, plane);
  }
  return plane;
}

export function fakeContents(file: string, fields: readonly FakeField[]): FileContents {
  return {
    file,
    format: "made up",
    bytes: 1000,
    fields: fields.map(
      ({ variable, quantity, levels, grid, steps }): FieldDescription => ({
        key: `${file}/${variable}`,
        file,
        variable,
        longName: variable,
        quantity,
        why: "made up",
        unitsInFile: "m",
        members: null,
        reference: null,
        units: "gpm",
        grid,
        steps,
        levels,
      }),
    ),
    leftOut: [],
    notes: [],
    about: {},
  };
}

/** An open file that makes its numbers by `fakeValue`. */
export function fakeFile(file: string, fields: readonly FakeField[]): OpenFile & { reads: number } {
  const contents = fakeContents(file, fields);
  return {
    contents,
    reads: 0,
    async read(key, { times, levels, rows }) {
      this.reads += 1;
      const field = contents.fields.find((candidate) => candidate.key === key);
      if (field === undefined) throw new DataError("NotFoundError", `no ${key}`);
      const chosen = field.levels === null ? [0] : (levels ?? Array.from(field.levels, (_, i) => i));
      const [from, to] = rows ?? [0, field.grid.lat.length];
      const nLon = field.grid.lon.length;
      const perLevel = (to - from) * nLon;
      const data = new Float64Array((times[1] - times[0]) * chosen.length * perLevel);
      let at = 0;
      for (let step = times[0]; step < times[1]; step++)
        for (const level of chosen) {
          const plane = fakePlane(step, level, field.grid.lat.length, nLon);
          data.set(plane.subarray(from * nLon, to * nLon), at);
          at += perLevel;
        }
      return {
        quantity: field.quantity,
        units: field.units,
        data,
        shape: [times[1] - times[0], chosen.length, to - from, nLon],
      };
    },
    async close() {},
  };
}
