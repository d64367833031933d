import { DataError } from "../../errors.ts";
import type { Levels } from "../../field/axes.ts";
import { acceptedSpellings, type Conversion, conversion } from "../../units/units.ts";
import type { StoredVariable, VariableStore } from "../variable-store.ts";
import { longName, numbersOf, textOf } from "./attributes.ts";
import { axisValues } from "./step-axis.ts";

/** hPa without the last digits that a conversion leaves: 70 Pa · 0.01 is 0.7000000000000001. */
function hectopascals(value: number, { factor }: Conversion): number {
  return Math.round(value * factor * 1e9) / 1e9;
}

/** Pressures of a level axis, hPa. @throws MetadataError if it is no pressure: such a field is left out, with the reason. */
export async function levelAxis(
  store: VariableStore,
  name: string,
  variable: StoredVariable | undefined,
): Promise<Float64Array> {
  const units = variable === undefined ? "" : (textOf(variable.attributes, "units") ?? "");
  const found = conversion("pressure", units);
  if (variable === undefined || found === null)
    throw new DataError(
      "MetadataError",
      `its levels (${name}) are in ${units === "" ? "no stated units" : `"${units}"`}, not in a pressure (${acceptedSpellings("pressure")})`,
    );
  const values = await axisValues(store, variable);
  const bad = values.findIndex((value) => !(value > 0 && Number.isFinite(value)));
  if (bad >= 0)
    throw new DataError(
      "MetadataError",
      `level ${bad + 1} of its ${values.length} (${name}) is ${values[bad]}, no pressure`,
    );
  return values.map((value) => hectopascals(value, found));
}

/** The pressure of a field without a level axis: a scalar coordinate, else its attributes, else its name. */
export async function statedLevel(store: VariableStore, variable: StoredVariable): Promise<Levels> {
  const named = (textOf(variable.attributes, "coordinates") ?? "").split(/\s+/);
  for (const candidate of store.variables) {
    const scalar =
      candidate.shape.length === 0 ||
      (candidate.shape.length === 1 && candidate.shape[0] === 1 && candidate.dims[0] !== candidate.name);
    if (!scalar || !named.includes(candidate.name) || candidate.type === "char") continue;
    const found = conversion("pressure", textOf(candidate.attributes, "units") ?? "");
    if (found === null) continue;
    const [value] = await axisValues(store, candidate);
    if (value !== undefined && value > 0 && Number.isFinite(value)) return Float64Array.of(hectopascals(value, found));
  }
  for (const attribute of ["level", "pressure", "pressure_level"]) {
    const [value] = numbersOf(variable.attributes, attribute);
    if (value !== undefined && value >= 1 && value <= 1100) return Float64Array.of(value);
  }
  const words = `${longName(variable)} ${textOf(variable.attributes, "level_desc") ?? ""} ${textOf(variable.attributes, "level") ?? ""}`;
  const inWords = /(\d{1,4}(?:\.\d+)?)[\s-]*(hPa|mb|mbar|millibars?)\b/i.exec(words);
  if (inWords !== null) return Float64Array.of(Number(inWords[1]));
  // u10 and v100 are winds 10 and 100 metres above the ground where the words say so, and u10 is that without words too.
  if (/\d\s*-?\s*(m|meters?|metres?)\b/i.test(words)) return null;
  const inName = /^[a-z]+_?(\d{2,4})(hpa|mb)?$/i.exec(variable.name);
  const level = Number(inName?.[1]);
  const least = inName?.[2] === undefined ? 20 : 10;
  return level >= least && level <= 1000 ? Float64Array.of(level) : null;
}
