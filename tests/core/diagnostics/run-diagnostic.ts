import { backgroundAt, backgroundPart, fitBackground, needsPass } from "../../../core/background/background.ts";
import { runningMean } from "../../../core/background/running-mean.ts";
import type { BackgroundSpec } from "../../../core/background/spec.ts";
import type {
  ChunkPart,
  Diagnostic,
  OptionValues,
  Outcome,
  ResultVariable,
  Series,
} from "../../../core/diagnostics/entry.ts";
import type { IndexRange, StepAxis } from "../../../core/field/axes.ts";
import type { Slab } from "../../../core/field/slab.ts";
import { closesCircle } from "../../../core/grid/circle.ts";

/** A record in memory: shape (time, level, lat, lon). */
export interface Cube {
  readonly values: Float64Array;
  readonly lat: Float64Array;
  readonly lon: Float64Array;
  readonly steps: StepAxis;
  readonly levels: Float64Array | null;
}

export function dailySteps(count: number, from = 0): StepAxis {
  return {
    kind: "time",
    name: "time",
    values: Float64Array.from({ length: count }, (_, i) => from + i),
    calendar: "standard",
  };
}

/** Run a diagnostic on a cube cut at `cuts`, as the engine does. */
export function runOn(
  diagnostic: Diagnostic,
  cube: Cube,
  options: OptionValues = {},
  background: BackgroundSpec = { kind: "none" },
  cuts: readonly number[] = [],
  times: IndexRange = [0, cube.steps.values.length],
): Outcome {
  const defaults = Object.fromEntries(diagnostic.options.map((option) => [option.name, option.default]));
  const chosen = { ...defaults, ...options };
  const series: Series = {
    grid: { lat: cube.lat, lon: cube.lon, closesCircle: closesCircle(cube.lon) },
    steps: cube.steps,
    times,
    levels: cube.levels,
    quantity: "geopotential_height",
    units: "gpm",
    background,
  };
  const plan = diagnostic.plan(series, chosen);
  const nLevel = cube.levels?.length ?? 1;
  const nLon = cube.lon.length;
  const nSteps = cube.steps.values.length;
  const slabOf = ([from, to]: IndexRange): Slab => {
    const nRow = plan.rows[1] - plan.rows[0];
    const data = new Float64Array((to - from) * nLevel * nRow * nLon);
    for (let s = from * nLevel, at = 0; s < to * nLevel; s++, at += nRow * nLon)
      data.set(
        cube.values.subarray((s * cube.lat.length + plan.rows[0]) * nLon, (s * cube.lat.length + plan.rows[1]) * nLon),
        at,
      );
    return { quantity: "geopotential_height", units: "gpm", data, shape: [to - from, nLevel, nRow, nLon] };
  };
  const fitted = needsPass(background)
    ? fitBackground([backgroundPart(background, slabOf([0, nSteps]), cube.steps, [0, nSteps])], series, plan.rows)
    : null;
  const parts: ChunkPart[] = [];
  const bounds = [times[0], ...cuts, times[1]];
  for (let i = 0; i + 1 < bounds.length; i++) {
    const own: IndexRange = [bounds[i] as number, bounds[i + 1] as number];
    const loaded: IndexRange = [Math.max(0, own[0] - plan.halo), Math.min(nSteps, own[1] + plan.halo)];
    const slab = slabOf(loaded);
    const backgrounds: Record<string, Float64Array> = {};
    if (plan.usesBackground && fitted !== null) backgrounds.field = backgroundAt(fitted, cube.steps, loaded, plan.rows);
    else if (plan.usesBackground && background.kind === "running-mean")
      backgrounds.field = runningMean(slabOf([0, nSteps]), cube.steps, [0, nSteps], loaded, background);
    parts.push(diagnostic.chunk({ slabs: { field: slab }, backgrounds, times: own, loaded }, series, chosen));
  }
  return diagnostic.finish(parts, series, chosen);
}

export function variable(outcome: Outcome, name: string): ResultVariable {
  const found = outcome.variables.find((one) => one.name === name);
  if (found === undefined)
    throw new Error(`The outcome has no variable ${name}: ${outcome.variables.map((one) => one.name).join(", ")}`);
  return found;
}

/** A variable's values as plain numbers. */
export function numbers(one: ResultVariable): number[] {
  return Array.from(one.data);
}
