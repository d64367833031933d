import { readFileSync } from "node:fs";
import { describe, expect, test } from "vitest";
import { blocking } from "../../../core/diagnostics/blocking.ts";
import type { OptionValues, Outcome } from "../../../core/diagnostics/entry.ts";
import { inventedCube, sampleCube, unpacked } from "./blocks/block-cubes.ts";
import { type Cube, numbers, runOn, variable } from "./run-diagnostic.ts";

// By numpy from the papers' definitions, blocks as sets of cells: reference/make_blocking.py
const reference = JSON.parse(readFileSync(new URL("./reference/blocking.json", import.meta.url), "utf8"));

interface ReferenceEvent {
  readonly start: number;
  readonly end: number;
  readonly days: number;
  readonly onset_cut: number;
  readonly end_cut: number;
  readonly side: number;
  readonly lon: number;
  readonly lat: number;
  readonly way: number;
  readonly area: number | null;
  readonly width: number;
  readonly strength: number;
  readonly largest: number;
  readonly highest: number;
  readonly at: readonly [number, number];
  readonly steps?: readonly (readonly [number, number, number, number])[];
}

const invented = inventedCube();
const sample = await sampleCube();

/**
 * The script writes events with six decimals (5e-7). Sums of under 5000 cells of 1e6 km² and unit vectors round off by
 * 5000 · 2⁻⁵² of themselves: 1e-12 of 1e8 km² = 1e-4 at the most for areas, far below 1e-6 for angles. A leg of a way is
 * good to the angles' rounding, 360° · 2⁻⁵² of a radius of 6371 km: 1e-11 km, and there are under 60.
 */
const LIMITS = { angle: 1e-6, area: 2e-4, way: 1e-6, strength: 1e-6, height: 1e-9 };

function expectNear(got: number, want: number, limit: number, words: string): void {
  expect(Math.abs(got - want) <= limit, `${words}: ${got}, should be ${want}, limit ${limit}`).toBe(true);
}

function expectEvents(out: Outcome, want: readonly ReferenceEvent[]): void {
  const column = (name: string): number[] => numbers(variable(out, name));
  for (const [name, key] of [
    ["start", "start"],
    ["end", "end"],
    ["days", "days"],
    ["event_hemisphere", "side"],
    ["onset_cut", "onset_cut"],
    ["end_cut", "end_cut"],
    ["largest_width", "width"],
  ] as const)
    expect(column(name), name).toEqual(want.map((event) => event[key]));
  const near = (name: string, numberOf: (event: ReferenceEvent) => number, limit: number): void => {
    const got = column(name);
    want.forEach((event, i) => {
      expectNear(got[i], numberOf(event), limit, `${name} of event ${i + 1}`);
    });
  };
  near("onset_longitude", ({ lon }) => lon, LIMITS.angle);
  near("onset_latitude", ({ lat }) => lat, LIMITS.angle);
  near("track_length", ({ way }) => way, LIMITS.way);
  near("strength", ({ strength }) => strength, LIMITS.strength);
  near("largest_strength", ({ largest }) => largest, LIMITS.strength);
  near("highest", ({ highest }) => highest, LIMITS.height);
  near("highest_longitude", ({ at }) => at[0], LIMITS.angle);
  near("highest_latitude", ({ at }) => at[1], LIMITS.angle);
  if (want[0].area !== null) near("largest_area", ({ area }) => area ?? 0, LIMITS.area);
  if (want[0].steps === undefined) return;
  const steps = want.flatMap((event, i) => (event.steps ?? []).map((step) => [i + 1, ...step] as const));
  expect(column("step_event")).toEqual(steps.map(([event]) => event));
  const table = ["step_longitude", "step_latitude", "step_area", "step_strength"];
  // Written to five decimals, areas to a km²
  const limits = [5.1e-6, 5.1e-6, 0.51, 5.1e-6];
  table.forEach((name, k) => {
    if (name === "step_area" && want[0].area === null) return;
    const got = column(name);
    steps.forEach((step, r) => {
      expectNear(got[r], step[k + 1] as number, limits[k], `${name}, row ${r}`);
    });
  });
}

/** Flags of one hemisphere in the script's order: rows from the equator poleward. */
function lane(out: Outcome, side: 1 | -1): number[] {
  const { data, shape, dims } = variable(out, "blocked");
  const nTime = shape[0];
  const nLon = shape[shape.length - 1];
  const nRow = data.length / nTime / nLon;
  const latitudes = out.coordinates.find(({ name }) => name === "latitude")?.values;
  const rows = dims.includes("latitude")
    ? Array.from(latitudes ?? [], (lat, j) => [side * lat, j] as const)
        .filter(([lat]) => lat > 0)
        .sort(([a], [b]) => a - b)
        .map(([, j]) => j)
    : [side === 1 ? 0 : 1];
  const flags: number[] = [];
  for (let t = 0; t < nTime; t++)
    for (const j of rows) for (let i = 0; i < nLon; i++) flags.push(data[(t * nRow + j) * nLon + i]);
  return flags;
}

function expectFlags(out: Outcome, want: Readonly<Record<string, string>>): void {
  for (const [side, name] of [
    [1, "north"],
    [-1, "south"],
  ] as const) {
    const got = lane(out, side);
    const flags = unpacked(want[name], got.length);
    const wrong = got.findIndex((flag, i) => flag !== flags[i]);
    expect(wrong, `${name}: flag ${wrong}`).toBe(-1);
  }
}

describe.each([
  ["400 invented days", invented, reference.invented],
  ["the sample case", sample, reference.sample],
] as const)("numpy's indices on %s", (_words, cube: Cube, want) => {
  const both = (options: OptionValues, cuts: number[] = []): Outcome =>
    runOn(blocking, cube, { hemisphere: "both", ...options }, { kind: "none" }, cuts);

  test("the record is the script's", () => {
    const sum = cube.values.reduce((total, z) => total + z, 0);
    // Pairwise sums there, one after the other here: n · 2⁻⁵³ of the total at most
    expectNear(sum, want.sum, Math.abs(want.sum) * cube.values.length * 2 ** -53, "sum of heights");
  });

  test("one dimension: flags, frequencies and events", () => {
    const out = both({ index: "one-dimensional" }, [13, 14, 40]);
    expect(variable(out, "blocked").dims).toEqual(["time", "hemisphere", "longitude"]);
    expectFlags(out, want.one);
    const frequency = numbers(variable(out, "frequency"));
    expect(frequency).toEqual([...want.one.north_frequency, ...want.one.south_frequency]);
    expectEvents(out, want.events.one);
    expectEvents(both({ index: "one-dimensional", gap_steps: 2 }), relaxed(want.events.one_gap, cube));
  });

  test("two dimensions: flags and events", () => {
    const out = both({}, [1, 59]);
    expect(variable(out, "blocked").dims).toEqual(["time", "latitude", "longitude"]);
    expectFlags(out, want.two);
    expectEvents(out, want.events.two);
    expectEvents(both({ gap_steps: 2 }), relaxed(want.events.two_gap, cube));
  });

  test("without the subtropical condition", () => {
    expectFlags(both({ subtropical_condition: false }), want.two_without);
  });
});

/** With gaps survived, an onset or end within the gap of the record's ends may be cut as well; the script knows the ends alone. */
function relaxed(events: readonly ReferenceEvent[], { steps: { values } }: Cube): ReferenceEvent[] {
  return events.map((event) => ({
    ...event,
    onset_cut: event.start - values[0] <= 2 ? 1 : 0,
    end_cut: values[values.length - 1] - event.end <= 2 ? 1 : 0,
  }));
}

test("persistent anomalies: flags and events of numpy", () => {
  const out = runOn(
    blocking,
    invented,
    { index: "anomaly", hemisphere: "both" },
    { kind: "record-mean" },
    [7, 8, 200, 391],
  );
  expectFlags(out, reference.invented.anomaly);
  expectEvents(out, reference.invented.events.anomaly);
});
