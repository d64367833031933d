import { DataError } from "../../errors.ts";
import type { StoredVariable, VariableStore } from "../variable-store.ts";
import { axisValues } from "./step-axis.ts";

const MOST_MEMBERS = 100_000; // only a damaged header promises more

/**
 * Numbers of an ensemble's members: the axis' own whole numbers, else 0, 1, 2 …
 *
 * @throws FormatError for a size that no ensemble has.
 */
export async function memberAxis(
  store: VariableStore,
  name: string,
  length: number,
  variable: StoredVariable | undefined,
): Promise<readonly number[]> {
  if (length > MOST_MEMBERS)
    throw new DataError("FormatError", `its axis ${name} has ${length} members; the file is damaged. Fetch it again.`);
  if (variable !== undefined && variable.type !== "char" && variable.shape.length === 1) {
    const values = [...(await axisValues(store, variable))];
    if (values.every(Number.isInteger) && new Set(values).size === values.length) return values;
  }
  return Array.from({ length }, (_, i) => i);
}
