import type { Outcome, ResultVariable } from "../diagnostics/entry.ts";
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
 * @param members Their numbers; [null] for a field without members, whose result stays as it is.
 * @throws ShapeError if two members' results are not of one shape.
 */
export function stackedOutcome(outcomes: readonly Outcome[], members: readonly (number | null)[]): Outcome {
  const [first] = outcomes;
  if (members[0] === null && outcomes.length === 1) return first;
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
  return {
    coordinates: [member, ...first.coordinates],
    variables,
    notes: [...new Set(outcomes.flatMap(({ notes }) => notes))],
  };
}
