import { DataError } from "../../errors.ts";
import type { Grid, Levels, StepAxis } from "../../field/axes.ts";
import type { Correction } from "../dataset.ts";
import type { StoredVariable, VariableStore } from "../variable-store.ts";
import { textOf } from "./attributes.ts";
import { type DimensionRole, dimensionRole } from "./dimension-role.ts";
import { memberAxis } from "./ensemble-axis.ts";
import { forecastSteps, startText, startVariable } from "./forecast-steps.ts";
import { gridOf, type OrderedAxis, orderedColumns, orderedRows } from "./horizontal.ts";
import { levelAxis, statedLevel } from "./level-axis.ts";
import { axisValues, recordAxis, SINGLE_STEP, timeAxis } from "./step-axis.ts";

/** How a variable's dimensions carry a field. Indices into its dims; −1 = it has none. */
export interface FieldLayout {
  readonly grid: Grid;
  readonly rows: OrderedAxis;
  readonly columns: OrderedAxis;
  readonly steps: StepAxis;
  readonly levels: Levels;
  readonly members: readonly number[] | null;
  /** Start of the forecast, days; null where there is none. */
  readonly reference: number | null;
  readonly stepDim: number;
  readonly levelDim: number;
  readonly memberDim: number;
  readonly latDim: number;
  readonly lonDim: number;
  /** The dimension of the forecasts' starts and which of them this field is. */
  readonly startDim: number;
  readonly startIndex: number;
  /** Set apart from the variable's other fields by this in the key; "" where there is only one. */
  readonly suffix: string;
  readonly notes: readonly string[];
}

/** Axes shared by the variables of a file are read once. */
export class AxisShelf {
  readonly #coordinates = new Map<string, StoredVariable>();
  readonly #held = new Map<string, Promise<unknown>>();
  constructor(store: VariableStore) {
    for (const variable of store.variables) {
      const { name, dims } = variable;
      if (dims.length === 1 && dims[0] === name) this.#coordinates.set(name, variable);
    }
  }
  coordinate(name: string): StoredVariable | undefined {
    return this.#coordinates.get(name);
  }
  once<T>(key: string, read: () => Promise<T>): Promise<T> {
    let held = this.#held.get(key);
    if (held === undefined) {
      held = read();
      this.#held.set(key, held);
    }
    return held as Promise<T>;
  }
}

function curvilinear(store: VariableStore, variable: StoredVariable): boolean {
  const named = (textOf(variable.attributes, "coordinates") ?? "").split(/\s+/);
  return store.variables.some(
    (candidate) =>
      named.includes(candidate.name) &&
      candidate.dims.length === 2 &&
      /^degrees?_?(n|e|north|east)/i.test(textOf(candidate.attributes, "units") ?? ""),
  );
}

function horizontalDims(
  store: VariableStore,
  variable: StoredVariable,
  roles: readonly DimensionRole[],
): { latDim: number; lonDim: number } {
  const latDim = roles.indexOf("latitude");
  const lonDim = roles.indexOf("longitude");
  if (latDim >= 0 && lonDim >= 0) return { latDim, lonDim };
  if (curvilinear(store, variable))
    throw new DataError(
      "GridError",
      "its grid is curvilinear (latitude and longitude have two dimensions each); regrid it to rows and columns of latitude and longitude",
    );
  throw new DataError(
    "GridError",
    `it has no ${latDim < 0 ? "latitude" : "longitude"} axis (dimensions ${variable.dims.join(", ") || "none"})`,
  );
}

interface Stepping {
  readonly steps: StepAxis;
  readonly reference: number | null;
  readonly startIndex: number;
  readonly suffix: string;
}

/**
 * What a variable's own roles make of its step and start dimensions.
 *
 * A time beside a lead is the forecast's start: what steps is the lead, and each start is a field of its own.
 */
function steppingDims(roles: readonly DimensionRole[]): { stepDim: number; startDim: number } {
  const lead = roles.indexOf("lead");
  const start = roles.indexOf("start");
  const time = roles.indexOf("time");
  if (lead >= 0) return { stepDim: lead, startDim: start >= 0 ? start : time };
  if (time >= 0) return { stepDim: time, startDim: start };
  return { stepDim: start, startDim: -1 };
}

async function steppings(
  store: VariableStore,
  variable: StoredVariable,
  shelf: AxisShelf,
  roles: readonly DimensionRole[],
  stepDim: number,
  startDim: number,
): Promise<Stepping[]> {
  const one = (steps: StepAxis, reference: number | null = null): Stepping[] => [
    { steps, reference, startIndex: 0, suffix: "" },
  ];
  const coordinateOf = (d: number): StoredVariable | undefined =>
    d < 0 ? undefined : shelf.coordinate(variable.dims[d] as string);
  const single = startVariable(store, variable);
  if (stepDim < 0) {
    const reference = single === undefined ? null : (await timeAxis(store, single)).values[0];
    return one(SINGLE_STEP, reference ?? null);
  }
  const name = variable.dims[stepDim] as string;
  const coordinate = coordinateOf(stepDim);
  if (roles[stepDim] === "lead" && coordinate !== undefined) {
    const start = startDim >= 0 ? coordinateOf(startDim) : single;
    if (start === undefined)
      throw new DataError(
        "MetadataError",
        `its steps (${name}) count from a forecast's start that the file does not tell`,
      );
    const forecasts = await shelf.once(`forecast ${start.name} ${name}`, () => forecastSteps(store, start, coordinate));
    if (forecasts.length === 0) throw new DataError("ShapeError", `its ${start.name} axis holds no start`);
    return forecasts.map(({ steps, reference, index }) => ({
      steps,
      reference,
      startIndex: index,
      suffix: forecasts.length === 1 ? "" : `@${startText(reference, steps.calendar)}`,
    }));
  }
  const isTime = (roles[stepDim] === "time" || roles[stepDim] === "start") && coordinate !== undefined;
  const steps = await shelf.once(`step ${name}`, () =>
    isTime ? timeAxis(store, coordinate) : recordAxis(store, name, variable.shape[stepDim] as number, coordinate),
  );
  if (steps.values.length === 0) throw new DataError("ShapeError", `its ${name} axis holds no step`);
  const start = startDim >= 0 ? coordinateOf(startDim) : isTime ? single : undefined;
  if (start === undefined) return one(steps);
  const starts = await shelf.once(`starts ${start.name}`, () => timeAxis(store, start));
  // Valid times beside several starts: each start is a forecast of its own over the same times.
  return [...starts.values].map((reference, startIndex) => ({
    steps,
    reference,
    startIndex,
    suffix: starts.values.length === 1 ? "" : `@${startText(reference, starts.calendar)}`,
  }));
}

/**
 * Find the axes of a variable: one field, or one for each forecast start that it holds.
 *
 * @throws DataError whose message is the reason why the variable is left out.
 */
export async function fieldLayouts(
  store: VariableStore,
  variable: StoredVariable,
  shelf: AxisShelf,
  correction: Correction | undefined,
): Promise<FieldLayout[]> {
  const roles: DimensionRole[] = variable.dims.map((name) => dimensionRole(name, shelf.coordinate(name)));
  const { latDim, lonDim } = horizontalDims(store, variable, roles);
  const levelDim = roles.indexOf("level");
  const memberDim = roles.indexOf("member");
  const dims = steppingDims(roles);
  let { stepDim } = dims;
  const { startDim } = dims;
  const rest = variable.dims
    .map((_, d) => d)
    .filter((d) => ![latDim, lonDim, levelDim, memberDim, stepDim, startDim].includes(d) && variable.shape[d] !== 1);
  // What is left steps if it is nothing else: a second latitude is no step.
  if (stepDim < 0 && rest.length === 1 && roles[rest[0] as number] === "other") stepDim = rest.pop() as number;
  if (rest.length > 0) {
    const words = rest.map((d) => `${variable.dims[d]} of ${variable.shape[d]}`).join(", ");
    throw new DataError(
      "ShapeError",
      `it has a further dimension, ${words}, that is not read; split the file along it`,
    );
  }
  const axis = (d: number): StoredVariable => {
    const name = variable.dims[d] as string;
    const coordinate = shelf.coordinate(name);
    if (coordinate === undefined)
      throw new DataError("MetadataError", `its dimension ${name} has no values of its own (no variable ${name})`);
    return coordinate;
  };
  const latitude = axis(latDim);
  const longitude = axis(lonDim);
  if ([latDim, lonDim, levelDim, memberDim].some((d) => variable.shape[d] === 0))
    throw new DataError("ShapeError", "it is empty");
  const rows = orderedRows(
    await shelf.once(`lat ${latitude.name}`, () => axisValues(store, latitude)),
    `${store.name}, ${latitude.name}`,
  );
  const columns = orderedColumns(
    await shelf.once(`lon ${longitude.name}`, () => axisValues(store, longitude)),
    `${store.name}, ${longitude.name}`,
  );
  let levels: Levels;
  if (levelDim >= 0) {
    const name = variable.dims[levelDim] as string;
    levels = await shelf.once(`level ${name}`, () => levelAxis(store, name, shelf.coordinate(name)));
  } else
    levels = correction?.level !== undefined ? Float64Array.of(correction.level) : await statedLevel(store, variable);
  let members: readonly number[] | null = null;
  if (memberDim >= 0) {
    const name = variable.dims[memberDim] as string;
    const length = variable.shape[memberDim] as number;
    members = await shelf.once(`member ${name}`, () => memberAxis(store, name, length, shelf.coordinate(name)));
  }
  const notes = [rows.note, columns.note].filter((note) => note !== null);
  const shared = { grid: gridOf(rows, columns), rows, columns, levels, members, notes };
  const found = await steppings(store, variable, shelf, roles, stepDim, startDim);
  return found.map((stepping) => ({
    ...shared,
    ...stepping,
    stepDim,
    levelDim,
    memberDim,
    startDim,
    latDim,
    lonDim,
  }));
}
