import type { Diagnostic, OptionSpec } from "../diagnostics/entry.ts";
import { QUANTITIES } from "../field/quantity.ts";

/** The part of JSON Schema (draft 7) that the recipe's schema uses; schema-check.ts knows exactly these keywords. */
export interface Schema {
  readonly $schema?: string;
  readonly title?: string;
  readonly description?: string;
  readonly default?: unknown;
  readonly type?: "object" | "array" | "string" | "number" | "integer" | "boolean" | "null";
  readonly const?: string | number;
  readonly enum?: readonly string[];
  readonly minimum?: number;
  readonly exclusiveMinimum?: number;
  readonly maximum?: number;
  readonly minLength?: number;
  readonly pattern?: string;
  readonly items?: Schema;
  readonly minItems?: number;
  readonly maxItems?: number;
  readonly properties?: Readonly<Record<string, Schema>>;
  readonly required?: readonly string[];
  readonly additionalProperties?: false;
  readonly anyOf?: readonly Schema[];
  /** With `discriminator`: the one branch whose property of that name is the `const` that the value has. */
  readonly oneOf?: readonly Schema[];
  readonly discriminator?: { readonly propertyName: string };
}

/** Keys of a result that are no options; no option may bear one of these names. */
export const RESULT_KEYS = ["id", "diagnostic", "field", "level", "member", "period"] as const;

const MOST_HARMONICS = 12;
const LONGEST_WINDOW = 3660; // days, ten years

const TEXT: Schema = { type: "string", minLength: 1 };
const LEVEL: Schema = { type: "number", exclusiveMinimum: 0 };

const MEMBER: Schema = { type: "integer", minimum: 0 };

function closedObject(
  properties: Readonly<Record<string, Schema>>,
  required: readonly string[],
  title: string,
): Schema {
  return { title, type: "object", properties, required, additionalProperties: false };
}

export const BACKGROUND_SCHEMA: Schema = {
  description: "What anomalies are departures from; absent = none.",
  type: "object",
  required: ["kind"],
  discriminator: { propertyName: "kind" },
  oneOf: [
    closedObject({ kind: { const: "none" } }, ["kind"], "No background"),
    closedObject({ kind: { const: "record-mean" } }, ["kind"], "Mean over the whole record"),
    closedObject(
      { kind: { const: "period-mean" }, from: TEXT, to: TEXT },
      ["kind", "from", "to"],
      "Mean over the steps between two dates, both included",
    ),
    closedObject(
      { kind: { const: "annual-cycle" }, harmonics: { type: "integer", minimum: 1, maximum: MOST_HARMONICS } },
      ["kind", "harmonics"],
      "Mean and harmonics of the year, by least squares",
    ),
    closedObject(
      { kind: { const: "running-mean" }, days: { type: "number", exclusiveMinimum: 0, maximum: LONGEST_WINDOW } },
      ["kind", "days"],
      "Centred running mean",
    ),
  ],
};

/** Schema of one option's value. That a range's ends rise cannot be said in JSON Schema: options.ts checks it. */
export function optionSchema(option: OptionSpec): Schema {
  const about = `${option.title}. ${option.about}${option.units === undefined ? "" : ` In ${option.units}.`}`;
  const told = { description: about, default: option.default };
  if (option.kind === "boolean") return { ...told, type: "boolean" };
  if (option.kind === "choice") return { ...told, type: "string", enum: option.choices.map((choice) => choice.value) };
  const isInteger = option.kind === "integer" || ("integer" in option && option.integer === true);
  const number: Schema = { type: isInteger ? "integer" : "number", minimum: option.min, maximum: option.max };
  const value: Schema =
    option.kind === "range"
      ? { type: "array", items: number, minItems: 2, maxItems: 2 }
      : option.kind === "list"
        ? { type: "array", items: number, minItems: 1 }
        : number;
  return option.default === null ? { ...told, anyOf: [value, { type: "null" }] } : { ...told, ...value };
}

function resultSchema(diagnostic: Diagnostic): Schema {
  const properties: Record<string, Schema> = {
    id: {
      description: "Name of the result and of its files: letters, digits, - and _.",
      type: "string",
      pattern: "^[A-Za-z0-9_-]{1,64}$",
    },
    diagnostic: { const: diagnostic.id },
    field: { description: "A quantity, or `file name/variable`.", type: "string", minLength: 1 },
    level: {
      description: "hPa, one or several; absent = all levels of the field.",
      anyOf: [LEVEL, { type: "array", items: LEVEL, minItems: 1 }],
    },
    member: {
      description: "Members of an ensemble by number, one or several; absent = all members of the field.",
      anyOf: [MEMBER, { type: "array", items: MEMBER, minItems: 1 }],
    },
    period: {
      description: "First and last date (ISO 8601), both included; on a record that is not a time, its numbers.",
      type: "array",
      items: { anyOf: [TEXT, { type: "number" }] },
      minItems: 2,
      maxItems: 2,
    },
  };
  for (const option of diagnostic.options) properties[option.name] = optionSchema(option);
  return {
    ...closedObject(properties, ["id", "diagnostic", "field"], diagnostic.title),
    description: diagnostic.summary,
  };
}

/** The recipe's JSON Schema, made from the catalogue. */
export function recipeSchema(catalogue: readonly Diagnostic[]): Schema {
  const correction = closedObject(
    {
      file: TEXT,
      variable: TEXT,
      quantity: { type: "string", enum: Object.keys(QUANTITIES) },
      units: TEXT,
      level: LEVEL,
      apart: { type: "boolean", description: "True: never joined with others to one record." },
    },
    ["file", "variable"],
    "What a variable is, said by the user",
  );
  return {
    $schema: "http://json-schema.org/draft-07/schema#",
    title: "Isohypse recipe",
    description: "Which results to compute from the files that are given with it.",
    type: "object",
    properties: {
      isohypse: { description: "Version of the recipe format.", const: 1 },
      title: { type: "string" },
      background: BACKGROUND_SCHEMA,
      corrections: {
        description: "What variables are that could not be recognised, or were recognised wrongly.",
        type: "array",
        items: correction,
      },
      results: {
        type: "array",
        minItems: 1,
        items: {
          type: "object",
          required: ["diagnostic"],
          discriminator: { propertyName: "diagnostic" },
          oneOf: catalogue.map(resultSchema),
        },
      },
    },
    required: ["isohypse", "results"],
    additionalProperties: false,
  };
}
