import { readFileSync } from "node:fs";
import { describe, expect, test } from "vitest";
import { blocking } from "../../../../core/diagnostics/blocking.ts";
import type { OptionValues, Outcome } from "../../../../core/diagnostics/entry.ts";
import { type Cube, numbers, runOn, variable } from "../run-diagnostic.ts";
import { inventedCube, sampleCube } from "./block-cubes.ts";

const whole = inventedCube();
const DAYS = 120;
const CELLS = 37 * 72;
/** The first days of the invented record: enough events, half the time. */
const cube: Cube = {
  ...whole,
  values: whole.values.slice(0, DAYS * CELLS),
  steps: { ...whole.steps, values: whole.steps.values.slice(0, DAYS) },
};

const INDICES: readonly (readonly [string, OptionValues, "none" | "record-mean"])[] = [
  ["one dimension", { index: "one-dimensional" }, "none"],
  ["two dimensions", { index: "two-dimensional" }, "none"],
  ["anomaly", { index: "anomaly", threshold: 120, persistence: 7 }, "record-mean"],
];

function moved(values: Float64Array, from: (j: number, i: number) => number): Float64Array {
  return values.map((_, at) => {
    const cell = at % CELLS;
    return values[at - cell + from(Math.floor(cell / 72), cell % 72)];
  });
}

function bytes({ buffer, byteOffset, byteLength }: ArrayBufferView): Buffer {
  return Buffer.from(buffer as ArrayBuffer, byteOffset, byteLength);
}

/** Events without their numbers, which follow from the order in which blocks are met. */
function eventRows(out: Outcome, names: readonly string[]): number[][] {
  const columns = names.map((name) => numbers(variable(out, name)));
  return columns[0].map((_, row) => columns.map((column) => column[row]));
}

describe.each(INDICES)("%s", (_words, options, kind) => {
  const run = (of: Cube, more: OptionValues, cuts: readonly number[] = []): Outcome =>
    runOn(blocking, of, { ...options, ...more }, { kind }, cuts);

  test("the southern hemisphere is the northern one mirrored, to the last bit", () => {
    const mirrored = { ...cube, values: moved(cube.values, (j, i) => (36 - j) * 72 + i) };
    const north = run(cube, {});
    const south = run(mirrored, { hemisphere: "south" });
    expect(variable(north, "start").data.length).toBeGreaterThan(3);
    for (const one of north.variables) {
      const other = variable(south, one.name);
      const isMirrored = one.name.endsWith("latitude") || one.name === "event_hemisphere";
      if (one.dims.includes("latitude")) {
        const nRow = one.shape[one.dims.indexOf("latitude")];
        const unlike = one.data.findIndex((value, at) => {
          const row = Math.floor(at / 72) % nRow;
          return !Object.is(other.data[at + (nRow - 1 - 2 * row) * 72], value);
        });
        expect(unlike, one.name).toBe(-1);
      } else expect(numbers(other), one.name).toEqual(numbers(one).map((x) => (isMirrored ? -x : x)));
    }
  });

  test("both hemispheres together are each by itself", () => {
    const both = run(cube, { hemisphere: "both" });
    for (const [side, hemisphere] of [
      [1, "north"],
      [-1, "south"],
    ] as const) {
      const one = run(cube, { hemisphere });
      const names = ["start", "end", "onset_longitude", "onset_latitude", "strength", "event_hemisphere"].filter(
        (name) => one.variables.some((each) => each.name === name),
      );
      const own = eventRows(both, names).filter((row) => row[row.length - 1] === side);
      expect(own).toEqual(eventRows(one, names));
    }
  });

  test("turned round the axis, flags and events turn along", () => {
    const columns = 29;
    const turned = { ...cube, values: moved(cube.values, (j, i) => j * 72 + ((i + columns) % 72)) };
    const a = run(cube, {});
    const b = run(turned, {});
    const [flags, others] = [variable(a, "blocked").data, variable(b, "blocked").data];
    const unlike = others.findIndex((flag, at) => flag !== flags[at - (at % 72) + (((at % 72) + columns) % 72)]);
    expect(unlike).toBe(-1);
    // Names of events may differ where overlaps are equal; what is whole degrees and days here does not.
    const names = ["start", "end", "largest_width", "highest"];
    const sorted = (out: Outcome) => eventRows(out, names).map(String).sort();
    expect(sorted(b)).toEqual(sorted(a));
  });

  test("a grid that begins at another meridian gives the same cells", () => {
    const lon = Float64Array.from({ length: 72 }, (_, i) => -180 + 5 * i);
    const other = { ...cube, lon, values: moved(cube.values, (j, i) => j * 72 + ((i + 36) % 72)) };
    const [a, b] = [run(cube, {}), run(other, {})];
    const names = ["start", "end", "highest_longitude", "highest"];
    const sorted = (out: Outcome) => eventRows(out, names).map(String).sort();
    expect(sorted(b)).toEqual(sorted(a));
  });

  test("however the record is cut into chunks, every bit is the same", () => {
    const one = run(cube, { hemisphere: "both" });
    for (const cuts of [[1, 2, 3], [60], Array.from({ length: 119 }, (_, t) => t + 1)]) {
      const cut = run(cube, { hemisphere: "both" }, cuts);
      expect(cut.notes).toEqual(one.notes);
      expect(cut.variables.map(({ name }) => name)).toEqual(one.variables.map(({ name }) => name));
      for (const { name, data } of one.variables)
        expect(Buffer.compare(bytes(variable(cut, name).data), bytes(data)), name).toBe(0);
    }
  });

  test("a selected period is worked on alone", () => {
    const period = runOn(blocking, cube, options, { kind }, [50], [20, 90]);
    const alone: Cube = {
      ...cube,
      values: cube.values.slice(20 * CELLS, 90 * CELLS),
      steps: { ...cube.steps, values: cube.steps.values.slice(20, 90) },
    };
    // The background of an anomaly is the whole record's: only the flags' own steps are the selection's.
    if (kind === "none") {
      const other = runOn(blocking, alone, options, { kind });
      for (const { name, data } of other.variables) expect(variable(period, name).data, name).toEqual(data);
    }
    expect(variable(period, "blocked").shape[0]).toBe(70);
    expect(Math.min(...numbers(variable(period, "start")))).toBeGreaterThanOrEqual(11_020);
  });

  test("the input is not changed", () => {
    const before = cube.values.slice();
    run(cube, { hemisphere: "both" });
    expect(cube.values.findIndex((value, at) => value !== before[at])).toBe(-1);
  });
});

test("the block that was put into the sample case is found within one step and 10°", async () => {
  const { block } = JSON.parse(
    readFileSync(new URL("../../../../sample-data/invented-winter.json", import.meta.url), "utf8"),
  );
  const out = runOn(blocking, await sampleCube(), {});
  const days = (text: string): number => Date.parse(`${text}T00:00Z`) / 86_400_000;
  const column = (name: string): number[] => numbers(variable(out, name));
  const found = column("start").findIndex((start) => Math.abs(start - days(block.onset)) <= 1);
  expect(found).toBeGreaterThanOrEqual(0);
  expect(Math.abs(column("end")[found] - days(block.end))).toBeLessThanOrEqual(1);
  expect(Math.abs(column("onset_longitude")[found] - block.longitude)).toBeLessThanOrEqual(10);
  expect(Math.abs(column("onset_latitude")[found] - block.latitude)).toBeLessThanOrEqual(10);
});
