import type { Coordinate, OptionValue, ResultVariable } from "../diagnostics/entry.ts";
import { DataError } from "../errors.ts";
import { REASONS } from "../field/reasons.ts";
import { classicFile, type WrittenAttribute, type WrittenFile, type WrittenVariable } from "../formats/netcdf/write.ts";
import { diagnosticOf } from "./catalogue.ts";
import type { Result } from "./recipe.ts";
import { reasonsOf } from "./result-reasons.ts";

const CONVENTIONS = "CF-1.11";

/** What CF says of the coordinates that diagnostics name; their own attributes win. */
const COORDINATE_ATTRIBUTES: Readonly<Record<string, Readonly<Record<string, string>>>> = {
  time: { standard_name: "time", long_name: "time", axis: "T" },
  level: { standard_name: "air_pressure", long_name: "pressure level", positive: "down", axis: "Z" },
  latitude: { standard_name: "latitude", long_name: "latitude", axis: "Y" },
  longitude: { standard_name: "longitude", long_name: "longitude", axis: "X" },
  wavenumber: { long_name: "zonal wavenumber" },
};

/** Units as UDUNITS, and so CF, spells them: a geopotential metre is CF's metre of geopotential height. */
function cfUnits(units: string): string {
  return units.replaceAll(/\bgpm(?![a-z])/g, "m");
}

function optionAttribute(value: OptionValue): WrittenAttribute {
  if (value === null) return "none";
  if (typeof value === "boolean") return String(value);
  return typeof value === "object" ? Float64Array.from(value) : value;
}

function globalAttributes(result: Result): Record<string, WrittenAttribute> {
  const { provenance, options, notes } = result;
  const diagnostic = diagnosticOf(result.diagnostic);
  const inputs = provenance.inputs.map(({ file, variable }) => `${file}/${variable}`).join(", ");
  const attributes: Record<string, WrittenAttribute> = {
    Conventions: CONVENTIONS,
    title: `${result.title} (${result.id})`,
    source: `${provenance.program}, ${result.diagnostic}, from ${inputs}`,
    history: `${provenance.made} ${provenance.program}: ${result.diagnostic} of ${inputs}`,
    references: diagnostic.sources.join("; "),
    summary: diagnostic.summary,
    validity: diagnostic.validity,
    diagnostic: result.diagnostic,
    recipe: JSON.stringify(provenance.recipe),
    background: JSON.stringify(provenance.background),
    input_recognised: provenance.inputs.map(({ variable, why }) => `${variable}: ${why}`).join("; "),
    input_bytes: Float64Array.from(provenance.inputs, ({ bytes }) => bytes),
  };
  for (const [name, value] of Object.entries(options)) attributes[`option_${name}`] = optionAttribute(value);
  if (notes.length > 0) attributes.comment = notes.join(" ");
  return attributes;
}

/** Sizes of all dimensions. @throws ShapeError if two variables disagree. */
function dimensionsOf(variables: readonly ResultVariable[]): Record<string, number> {
  const sizes: Record<string, number> = {};
  for (const { name, dims, shape } of variables)
    dims.forEach((dim, d) => {
      sizes[dim] ??= shape[d];
      if (sizes[dim] !== shape[d])
        throw new DataError("ShapeError", `${name}: ${dim} has ${shape[d]} values here and ${sizes[dim]} elsewhere`);
    });
  return sizes;
}

/** A file's name for a step axis that is no time: `month (time)` on the dimension that all results step along. */
export function recordName({ name, attributes }: Coordinate): string | null {
  if (name !== "time" || attributes?.calendar !== undefined) return null;
  const own = (attributes?.long_name ?? "").replaceAll(/\W/g, "_");
  return /^[A-Za-z]/.test(own) && own !== "time" ? own : "step";
}

function coordinateVariable(coordinate: Coordinate, dims: readonly string[]): WrittenVariable {
  const { name, values, units, attributes = {} } = coordinate;
  const record = recordName(coordinate);
  const known = record === null ? (COORDINATE_ATTRIBUTES[name] ?? { long_name: name }) : {};
  return { name: record ?? name, dims, attributes: { ...known, ...attributes, units: cfUnits(units) }, data: values };
}

/** Edges of a band, as CF's bounds of its one latitude. */
function bandBounds(result: Result): WrittenVariable[] {
  const { band } = result.options;
  if (!Array.isArray(band) || !result.coordinates.some(({ name }) => name === "band")) return [];
  return [{ name: "band_bounds", dims: ["band", "bound"], attributes: {}, data: Float64Array.from(band) }];
}

function reasonVariable(variable: ResultVariable): WrittenVariable {
  return {
    name: `${variable.name}_reason`,
    dims: variable.dims,
    attributes: {
      standard_name: "status_flag",
      long_name: `why ${variable.name} is missing or needs care`,
      flag_values: Int8Array.from(REASONS, ({ code }) => code),
      flag_meanings: REASONS.map(({ words }) => words.replaceAll("'s", "s").replaceAll(/\W+/g, "_")).join(" "),
    },
    // Codes are under 128: the same bytes, signed.
    data: new Int8Array(reasonsOf(variable).buffer),
  };
}

/** Calendar in which the result's days count; undefined where its steps are no times. */
export function calendarOf({ coordinates }: Pick<Result, "coordinates">): string | undefined {
  return coordinates.find(({ name }) => name === "time")?.attributes?.calendar;
}

/** Variables that are the very quantity of the input, and so bear its CF name. */
const SAME_QUANTITY = ["mean", "reconstruction"];

function quantityName({ name }: ResultVariable, { provenance }: Result): Readonly<Record<string, string>> {
  const quantity = provenance.inputs[0]?.quantity ?? null;
  return quantity !== null && SAME_QUANTITY.includes(name) ? { standard_name: quantity } : {};
}

function dataVariable(
  variable: ResultVariable,
  listed: readonly string[],
  named: Readonly<Record<string, string>>,
  calendar: string | undefined,
): WrittenVariable {
  const { name, title, units, dims, data } = variable;
  const attributes: Record<string, WrittenAttribute> = {
    ...named,
    long_name: title,
    units: cfUnits(units),
    ancillary_variables: `${name}_reason`,
  };
  // Of the variable's own type, as CF asks.
  if (data instanceof Float64Array) attributes._FillValue = Float64Array.of(Number.NaN);
  if (data instanceof Float32Array) attributes._FillValue = Float32Array.of(Number.NaN);
  // Bytes are written signed: 255, which stands for unknown, is −1 there.
  if (data instanceof Uint8Array) attributes._FillValue = Int8Array.of(-1);
  if (units.startsWith("days since") && calendar !== undefined) attributes.calendar = calendar;
  if (listed.length > 0) attributes.coordinates = listed.join(" ");
  return {
    name,
    dims,
    attributes,
    data: data instanceof Uint8Array ? new Int8Array(data.buffer, data.byteOffset, data.length) : data,
  };
}

/**
 * What the netCDF file of a result holds: its variables, each with the reasons for what is missing, its coordinates, and
 * as global attributes every option and where it came from.
 *
 * @throws ShapeError if variables disagree on a dimension, or a coordinate fits none.
 */
export function resultLayout(result: Result): WrittenFile {
  const dimensions = dimensionsOf(result.variables);
  const coordinates = result.coordinates.map((coordinate) => {
    const size = dimensions[coordinate.name];
    if (size !== undefined && size !== coordinate.values.length)
      throw new DataError("ShapeError", `${coordinate.name} has ${coordinate.values.length} values for ${size} cells`);
    if (size === undefined && coordinate.values.length !== 1)
      throw new DataError("ShapeError", `no variable has the dimension ${coordinate.name}`);
    return coordinateVariable(coordinate, size === undefined ? [] : [coordinate.name]);
  });
  // Coordinates that are not named like their dimension (CF 5): the variables that they belong to must list them.
  const listed = coordinates.filter(({ name, dims }) => dims.length === 0 || dims[0] !== name);
  const bounds = bandBounds(result);
  const own = coordinates.map((coordinate) =>
    coordinate.name === "band" && bounds.length > 0
      ? { ...coordinate, attributes: { ...coordinate.attributes, bounds: "band_bounds" } }
      : coordinate,
  );
  return {
    dimensions: bounds.length > 0 ? { ...dimensions, bound: 2 } : dimensions,
    attributes: globalAttributes(result),
    variables: [
      ...own,
      ...bounds,
      ...result.variables.flatMap((variable) => {
        const aside = listed.filter(({ dims }) => dims.every((dim) => variable.dims.includes(dim)));
        return [
          dataVariable(
            variable,
            aside.map(({ name }) => name),
            quantityName(variable, result),
            calendarOf(result),
          ),
          reasonVariable(variable),
        ];
      }),
    ],
  };
}

/**
 * The bytes of a result's netCDF classic file, piece by piece.
 *
 * @param isFleeting True where each piece is done with before the next is asked for.
 * @throws As `resultLayout`, before the first piece.
 */
export function resultBytes(result: Result, isFleeting = false): Generator<Uint8Array<ArrayBuffer>, void> {
  return classicFile(resultLayout(result), isFleeting);
}
