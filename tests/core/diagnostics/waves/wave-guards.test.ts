import { describe, expect, test } from "vitest";
import type { OptionValues, Series } from "../../../../core/diagnostics/entry.ts";
import { zonalWaves } from "../../../../core/diagnostics/zonal-waves.ts";
import { reasonCode } from "../../../../core/field/reasons.ts";
import { type Cube, numbers, runOn, variable } from "../run-diagnostic.ts";
import { RAD, referenceCube, rowCube } from "../wave-cubes.ts";

describe("guards", () => {
  const lon = Float64Array.from({ length: 36 }, (_, i) => 10 * i);
  const cube = rowCube((l) => Math.cos(l * RAD), lon);
  test("a missing value masks its own row and no other", () => {
    const values = new Float64Array(72).map((_, i) => Math.cos((lon[i % 36] as number) * RAD));
    values[5] = Number.NaN;
    const amplitude = variable(
      runOn(zonalWaves, { ...cube, values, lat: Float64Array.of(50, 60) }, { waves: [1, 1] }),
      "amplitude",
    );
    expect(amplitude.reasons).toEqual(Uint8Array.of(reasonCode("missing"), 0));
    expect(amplitude.data[0]).toBeNaN();
    expect(Math.abs((amplitude.data[1] as number) - 1)).toBeLessThan(1e-14);
  });
  test.each([
    [
      "a grid that does not close the circle",
      () =>
        runOn(
          zonalWaves,
          rowCube(() => 1, lon.slice(0, 30)),
        ),
      "do not close the circle",
    ],
    [
      "uneven columns",
      () =>
        runOn(
          zonalWaves,
          rowCube(
            () => 1,
            lon.map((l, i) => (i === 3 ? l + 1 : l)),
          ),
        ),
      "not evenly spaced",
    ],
    ["a band without a row", () => runOn(zonalWaves, cube, { band: [60, 70] }), "holds no row"],
    [
      "a latitude off the grid",
      () =>
        runOn(zonalWaves, { ...cube, lat: Float64Array.of(50, 52), values: new Float64Array(72) }, { band: [70, 70] }),
      "no row near",
    ],
    ["waves beyond the grid's", () => runOn(zonalWaves, cube, { waves: [20, 22] }), "carry waves 1 to 18"],
    ["anomalies without a background", () => runOn(zonalWaves, cube, { of: "anomaly" }), "needs a background"],
    ["a wave that cannot be put together", () => runOn(zonalWaves, cube, { reconstruct: [19] }), "wave 19 is beyond"],
    [
      "an incoherent reconstruction",
      () => runOn(zonalWaves, cube, { band: [50, 60], average: "incoherent", reconstruct: [1] }),
      "no phase",
    ],
    ["an empty list of waves", () => runOn(zonalWaves, cube, { reconstruct: [] }), "names no wave"],
    [
      "a point off the grid's rows",
      () =>
        runOn(
          zonalWaves,
          { ...cube, lat: Float64Array.of(50, 52), values: new Float64Array(72) },
          { point: [-50, 10] },
        ),
      "no row near -50",
    ],
    ["a point of one number", () => runOn(zonalWaves, cube, { point: [50] }), "not a latitude"],
    ["a point that is none", () => runOn(zonalWaves, cube, { point: [95, 0] }), "not a latitude"],
  ])("%s is refused", (_words, run, words) => {
    expect(run).toThrow(words);
  });
  test("waves are cut off where the grid ends, and that is said", () => {
    const out = runOn(zonalWaves, cube, { waves: [17, 40] });
    expect(variable(out, "amplitude").shape).toEqual([1, 1, 1, 2]);
    expect(out.notes.join()).toContain("Waves end at 18, the shortest that 36 columns carry; 40 was asked for");
    expect(runOn(zonalWaves, cube, { waves: [17, 18] }).notes).toEqual([]);
  });
});

test("near the record's ends a running mean gives no background: the reason is the edge, not missing data", () => {
  const cube: Cube = { ...referenceCube(), levels: null };
  const spec = { kind: "running-mean", days: 5 } as const;
  const options = { band: [40, 60], waves: [1, 3], of: "anomaly", reconstruct: [1, 2], point: [50, 0] };
  const whole = runOn(zonalWaves, cube, options, spec);
  for (const name of [
    "amplitude",
    "ridge_longitude",
    "interference",
    "background_amplitude",
    "reconstruction",
    "share",
  ]) {
    const one = variable(whole, name);
    const each = one.data.length / 40;
    for (let t = 0; t < 40; t++) {
      const isEdge = t < 2 || t > 37;
      expect(one.reasons?.[t * each], `${name}, step ${t}`).toBe(isEdge ? reasonCode("edge") : 0);
      expect(Number.isNaN(one.data[t * each]), `${name}, step ${t}`).toBe(isEdge);
    }
  }
  expect(whole.notes.join()).toContain("4 steps lie nearer to the record's ends");
  // The field's own waves have no edge; only what the background goes into does
  const field = runOn(zonalWaves, cube, { ...options, of: "field" }, spec);
  expect(variable(field, "amplitude").reasons).toBeUndefined();
  expect(variable(field, "interference").reasons?.[0]).toBe(reasonCode("edge"));
  // Inside the record a selected period has no edges of its own
  const inside = runOn(zonalWaves, cube, options, spec, [], [5, 20]);
  expect(variable(inside, "amplitude").reasons).toBeUndefined();
  expect(inside.notes).toEqual([]);
  expect(numbers(variable(inside, "amplitude"))).toEqual(numbers(variable(whole, "amplitude")).slice(15, 60));
});

test("an incoherent band of the field itself asks for no background", () => {
  const cube = referenceCube();
  const series: Series = {
    grid: { lat: cube.lat, lon: cube.lon, closesCircle: true },
    steps: cube.steps,
    times: [0, 40],
    levels: cube.levels,
    quantity: "geopotential_height",
    units: "gpm",
    background: { kind: "record-mean" },
  };
  const defaults = Object.fromEntries(zonalWaves.options.map((option) => [option.name, option.default]));
  const usesBackground = (options: OptionValues): boolean =>
    zonalWaves.plan(series, { ...defaults, ...options }).usesBackground;
  expect(usesBackground({ band: [40, 60], average: "incoherent" })).toBe(false);
  expect(usesBackground({ band: [40, 60], average: "incoherent", of: "anomaly" })).toBe(true);
  expect(usesBackground({ band: [40, 60] })).toBe(true);
});
