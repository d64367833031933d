import type { Coordinate, Outcome, ResultVariable } from "../diagnostics/entry.ts";
import { DataError } from "../errors.ts";

type Data = ResultVariable["data"];

function emptyLike(data: Data, size: number): Data {
  if (data instanceof Float64Array) return new Float64Array(size);
  if (data instanceof Float32Array) return new Float32Array(size);
  return data instanceof Int32Array ? new Int32Array(size) : new Uint8Array(size);
}

/**
 * The results of several members as one, `member` before every other dimension.
 *
 * Rows of tables, which each member has as many of as it has, follow one another and say whose they are.
 *
 * @param tables Dimensions that number rows of tables.
 * @param members Their numbers; [null] for a field without members, whose result stays as it is.
 * @throws ShapeError if two members' results are not of one shape.
 */
export function stackedOutcome(
  whole: readonly Outcome[],
  members: readonly (number | null)[],
  tables: readonly string[] = [],
): Outcome {
  if (members[0] === null && whole.length === 1) return whole[0] as Outcome;
  const isRow = ({ dims }: ResultVariable): boolean => dims.some((dim) => tables.includes(dim));
  const outcomes = whole.map((outcome) => ({
    ...outcome,
    variables: outcome.variables.filter((variable) => !isRow(variable)),
  }));
  const rows = tables.flatMap((dim) => joinedTable(whole, members, dim));
  const first = outcomes[0] as Outcome;
  const variables = first.variables.map((variable, v): ResultVariable => {
    const own = outcomes.map((outcome) => outcome.variables[v]);
    const size = variable.data.length;
    if (own.some((other) => other?.name !== variable.name || other.data.length !== size))
      throw new DataError(
        "ShapeError",
        `${variable.name} is not of one shape in all members; ask for one member at a time.`,
      );
    const isSingle = own.some(({ data }) => data instanceof Float32Array);
    const data = isSingle ? new Float32Array(size * own.length) : emptyLike(variable.data, size * own.length);
    own.forEach((other, m) => {
      data.set(other.data, m * size);
    });
    const stacked = { ...variable, dims: ["member", ...variable.dims], shape: [own.length, ...variable.shape], data };
    if (own.every(({ reasons }) => reasons === undefined)) return stacked;
    const reasons = new Uint8Array(size * own.length);
    own.forEach((other, m) => {
      if (other.reasons !== undefined) reasons.set(other.reasons, m * size);
    });
    return { ...stacked, reasons };
  });
  const member = {
    name: "member",
    values: Float64Array.from(members, (number) => number ?? 0),
    units: "1",
    attributes: { standard_name: "realization", long_name: "member of the ensemble" },
  };
  const kept = first.coordinates.filter(({ name }) => !tables.includes(name));
  return {
    coordinates: [member, ...kept, ...rows.flatMap(({ coordinate }) => coordinate)],
    variables: [...variables, ...rows.flatMap((table) => table.variables)],
    notes: [...new Set(outcomes.flatMap(({ notes }) => notes))],
  };
}

interface JoinedTable {
  readonly coordinate: Coordinate;
  readonly variables: readonly ResultVariable[];
}

/** The rows of every member's table, one member after the other, with a column of whose they are. */
function joinedTable(outcomes: readonly Outcome[], members: readonly (number | null)[], dim: string): JoinedTable[] {
  const own = outcomes.map(({ variables }) => variables.filter(({ dims }) => dims.length === 1 && dims[0] === dim));
  const some = own.find((variables) => variables.length > 0);
  const long = outcomes.flatMap(({ coordinates }) => coordinates.find(({ name }) => name === dim) ?? [])[0];
  if (some === undefined || long === undefined) return [];
  const rows = own.map((variables) => variables[0]?.data.length ?? 0);
  const total = rows.reduce((sum, n) => sum + n, 0);
  const columns = some.map((variable) => {
    const data = new Float64Array(total);
    const reasons = new Uint8Array(total);
    let at = 0;
    own.forEach((variables, m) => {
      const column = variables.find(({ name }) => name === variable.name);
      if (column !== undefined) {
        data.set(column.data, at);
        if (column.reasons !== undefined) reasons.set(column.reasons, at);
      }
      at += rows[m] as number;
    });
    return { ...variable, shape: [total], data, ...(reasons.some((code) => code !== 0) ? { reasons } : {}) };
  });
  const whose = {
    name: `${dim}_member`,
    title: "Member of the ensemble",
    units: "1",
    dims: [dim],
    shape: [total],
    data: Float64Array.from(rows.flatMap((n, m) => new Array<number>(n).fill(members[m] ?? 0))),
  };
  const number = {
    ...whose,
    name: `${dim}_number`,
    title: "Number within its member",
    data: Float64Array.from(rows.flatMap((n) => Array.from({ length: n }, (_, i) => i + 1))),
  };
  const values = Float64Array.from({ length: total }, (_, i) => i + 1);
  return [{ coordinate: { ...long, values }, variables: [whose, number, ...columns] }];
}
