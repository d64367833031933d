import { describe, expect, test } from "vitest";
import { blocking } from "../../../../core/diagnostics/blocking.ts";
import { rowFor } from "../../../../core/diagnostics/blocks/block-rows.ts";
import { RUN, RunFinder } from "../../../../core/diagnostics/blocks/blocked-runs.ts";
import { BLOCK_OUTPUTS } from "../../../../core/diagnostics/blocks/output-specs.ts";
import { inclusiveDays, recordPieces, stepsWithin } from "../../../../core/diagnostics/blocks/record-pieces.ts";
import type { Series } from "../../../../core/diagnostics/entry.ts";
import { localWaveActivity } from "../../../../core/diagnostics/local-wave-activity.ts";
import { runOn } from "../run-diagnostic.ts";
import { inventedCube } from "./block-cubes.ts";

/** Numerical Recipes' 32-bit generator, its upper bits as a number under 1. */
function generator(seed: number): () => number {
  let x = seed;
  return () => {
    x = (Math.imul(1664525, x) + 1013904223) >>> 0;
    return (x >>> 8) / 2 ** 24;
  };
}

/** The definition: cells that touch, corners included, round the circle, by flood fill in the order of their first cell. */
function flooded(states: Uint8Array, nRow: number, nLon: number, leastColumns: number): Int32Array {
  const labels = new Int32Array(states.length).fill(-2);
  let blocks = 0;
  for (let seed = 0; seed < states.length; seed++) {
    if (states[seed] !== 1 || labels[seed] !== -2) continue;
    const cells = [seed];
    labels[seed] = -3;
    for (let k = 0; k < cells.length; k++) {
      const row = Math.floor(cells[k] / nLon);
      for (let dj = -1; dj <= 1; dj++)
        for (let di = -1; di <= 1; di++) {
          const j = row + dj;
          const cell = j * nLon + (((cells[k] % nLon) + di + nLon) % nLon);
          if (j < 0 || j >= nRow || states[cell] !== 1 || labels[cell] !== -2) continue;
          labels[cell] = -3;
          cells.push(cell);
        }
    }
    const isWide = new Set(cells.map((cell) => cell % nLon)).size >= leastColumns;
    for (const cell of cells) labels[cell] = isWide ? blocks : -1;
    if (isWide) blocks += 1;
  }
  return labels;
}

describe("blocks of a plane", () => {
  test.each([
    [1, 40, 0.6],
    [3, 24, 0.5],
    [17, 144, 0.1],
    [17, 144, 0.35],
    [17, 144, 0.5],
    [30, 60, 0.9],
    [5, 8, 1],
    [5, 8, 0],
  ])("%i rows of %i, blocked by chance %f: as by flood fill", (nRow, nLon, share) => {
    const next = generator(nRow * nLon + share * 100);
    const finder = new RunFinder(nLon, 4);
    for (let trial = 0; trial < 40; trial++) {
      const states = new Uint8Array(nRow * nLon).map(() => (next() < share ? 1 : next() < 0.1 ? 255 : 0));
      const { runs, count, blocks } = finder.find(states, nRow);
      const labels = new Int32Array(states.length).fill(-2);
      for (let r = 0; r < count; r++)
        labels.fill(
          runs[RUN * r + 3],
          runs[RUN * r] * nLon + runs[RUN * r + 1],
          runs[RUN * r] * nLon + runs[RUN * r + 2],
        );
      const want = flooded(states, nRow, nLon, 4);
      expect(labels).toEqual(want);
      expect(blocks).toBe(Math.max(-1, ...want) + 1);
    }
  });
});

describe("rows", () => {
  const lat = Float64Array.of(-70, -50, -40, -10, 10, 40, 50, 70);
  test("the nearest, ties equatorward in either hemisphere", () => {
    expect(lat[rowFor(lat, 1, 45, "")]).toBe(40);
    expect(lat[rowFor(lat, -1, 45, "")]).toBe(-40);
    expect(lat[rowFor(lat, -1, 46, "")]).toBe(-50);
    expect(lat[rowFor(lat, 1, -10, "")]).toBe(-10);
    // A Gaussian grid's last row stands for the pole: 89.9° goes to 88.9°, for 90° is nearer than a spacing of 1.4°
    const gaussian = Float64Array.of(-88.9, -87.5, 0, 86, 88.9);
    expect(rowFor(gaussian, -1, 89.9, "")).toBe(0);
    expect(rowFor(gaussian, 1, 90, "")).toBe(4);
    expect(() => rowFor(gaussian, 1, 90.1, "")).toThrow("90.1°N");
    expect(() => rowFor(Float64Array.of(-87, -85, 85, 87), 1, 90, "")).toThrow("near 90°N");
    // Half a spacing, 10°, beyond the last row, and no more
    expect(lat[rowFor(lat, 1, 80, "")]).toBe(70);
    expect(() => rowFor(lat, -1, 80.1, "why")).toThrow("needs a row near 80.1°S (why)");
  });
});

describe("pieces of a record", () => {
  const series = (values: readonly number[], kind: "time" | "record" = "time"): Series =>
    ({
      steps: { kind, name: "time", values: Float64Array.from(values), calendar: "standard" },
      times: [0, values.length],
    }) as unknown as Series;
  test("the usual step is the median, and gaps are over 1.5 of it", () => {
    const pieces = recordPieces(series([0, 1, 2, 3.5, 4.5, 6.1, 7.1]));
    expect(pieces.usual).toBe(1);
    expect(Array.from(pieces.begins)).toEqual([1, 0, 0, 0, 0, 1, 0]);
    expect(pieces.gaps).toBe(1);
    expect(inclusiveDays(pieces, 0, 4)).toBe(5.5);
  });
  test("steps that fill some days, onward and back", () => {
    expect(stepsWithin(recordPieces(series([0, 1, 2, 3, 4, 5, 6, 7, 8, 9, 10, 11])), 10)).toBe(9);
    expect(stepsWithin(recordPieces(series([0, 0.25, 0.5, 0.75, 1, 1.25])), 1)).toBe(3);
    expect(stepsWithin(recordPieces(series([0, 1, 2])), 10)).toBe(0);
    expect(stepsWithin(recordPieces(series([0, 1, 2], "record")), 2)).toBe(0);
    expect(stepsWithin(recordPieces(series([0])), 2)).toBe(0);
    // Back from the last step it takes three steps to three days; onward from any step, two
    expect(stepsWithin(recordPieces(series([0, 1.4, 2.8, 3.4, 4])), 3)).toBe(3);
  });
});

test("every variable that is written is described, with its units, and all that is described is written", () => {
  const cube = inventedCube();
  const written = new Map(
    [runOn(blocking, cube, { hemisphere: "both" }), runOn(blocking, cube, { index: "one-dimensional" })].flatMap(
      ({ variables }) => variables.map((one) => [one.name, one] as const),
    ),
  );
  expect([...written.keys()].sort()).toEqual(BLOCK_OUTPUTS.map(({ name }) => name).sort());
  for (const { name, units } of BLOCK_OUTPUTS)
    expect(written.get(name)?.units, name).toBe(units.replace("input", "gpm"));
  const few = {
    ...cube,
    values: cube.values.slice(0, 37 * 72),
    steps: { ...cube.steps, values: cube.steps.values.slice(0, 1) },
  };
  const activity = runOn(localWaveActivity, few).variables;
  expect(activity.map(({ name, units }) => [name, units])).toEqual(
    localWaveActivity.outputs.map(({ name, units }) => [name, units]),
  );
});
