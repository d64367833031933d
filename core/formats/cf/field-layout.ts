import { DataError } from "../../errors.ts";
import type { Grid, Levels, StepAxis } from "../../field/axes.ts";
import type { Correction } from "../dataset.ts";
import type { StoredVariable, VariableStore } from "../variable-store.ts";
import { textOf } from "./attributes.ts";
import { type DimensionRole, dimensionRole } from "./dimension-role.ts";
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
  readonly stepDim: number;
  readonly levelDim: number;
  readonly latDim: number;
  readonly lonDim: number;
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

/**
 * Find the axes of a variable.
 *
 * @throws DataError whose message is the reason why the variable is left out.
 */
export async function fieldLayout(
  store: VariableStore,
  variable: StoredVariable,
  shelf: AxisShelf,
  correction: Correction | undefined,
): Promise<FieldLayout> {
  const roles: DimensionRole[] = variable.dims.map((name) => dimensionRole(name, shelf.coordinate(name)));
  const latDim = roles.indexOf("latitude");
  const lonDim = roles.indexOf("longitude");
  if (latDim < 0 || lonDim < 0) {
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
  const levelDim = roles.indexOf("level");
  let stepDim = roles.indexOf("time");
  const rest = variable.dims
    .map((_, d) => d)
    .filter((d) => ![latDim, lonDim, levelDim, stepDim].includes(d) && variable.shape[d] !== 1);
  if (stepDim < 0 && rest.length === 1) stepDim = rest.pop() as number;
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
  if ([latDim, lonDim, levelDim].some((d) => variable.shape[d] === 0)) throw new DataError("ShapeError", "it is empty");
  const rows = orderedRows(
    await shelf.once(`lat ${latitude.name}`, () => axisValues(store, latitude)),
    `${store.name}, ${latitude.name}`,
  );
  const columns = orderedColumns(
    await shelf.once(`lon ${longitude.name}`, () => axisValues(store, longitude)),
    `${store.name}, ${longitude.name}`,
  );
  let steps = SINGLE_STEP;
  if (stepDim >= 0) {
    const name = variable.dims[stepDim] as string;
    const coordinate = shelf.coordinate(name);
    steps = await shelf.once(`step ${name}`, () =>
      roles[stepDim] === "time" && coordinate !== undefined
        ? timeAxis(store, coordinate)
        : recordAxis(store, name, variable.shape[stepDim] as number, coordinate),
    );
    if (steps.values.length === 0) throw new DataError("ShapeError", `its ${name} axis holds no step`);
  }
  let levels: Levels;
  if (levelDim >= 0) {
    const name = variable.dims[levelDim] as string;
    levels = await shelf.once(`level ${name}`, () => levelAxis(store, name, shelf.coordinate(name)));
  } else
    levels = correction?.level !== undefined ? Float64Array.of(correction.level) : await statedLevel(store, variable);
  const notes = [rows.note, columns.note].filter((note) => note !== null);
  return { grid: gridOf(rows, columns), rows, columns, steps, levels, stepDim, levelDim, latDim, lonDim, notes };
}
