import { type Json, memberPath } from "./json-text.ts";
import { nearestWord } from "./nearest-word.ts";
import type { Schema } from "./schema.ts";

/** One thing that is wrong in a document: where, and in words. */
export interface Fault {
  readonly path: string;
  readonly words: string;
}

type JsonObject = { readonly [key: string]: Json };

function isObject(value: unknown): value is JsonObject {
  return typeof value === "object" && value !== null && !Array.isArray(value);
}

/** A value, short enough for a sentence. */
function shown(value: unknown): string {
  const text = JSON.stringify(value) ?? String(value);
  return text.length > 40 ? `${text.slice(0, 37)}…` : text;
}

function bounds(schema: Schema): string {
  const { minimum, exclusiveMinimum, maximum } = schema;
  if (minimum !== undefined && maximum !== undefined) return ` from ${minimum} to ${maximum}`;
  if (exclusiveMinimum !== undefined)
    return ` above ${exclusiveMinimum}${maximum === undefined ? "" : ` and at most ${maximum}`}`;
  if (minimum !== undefined) return ` of at least ${minimum}`;
  return maximum === undefined ? "" : ` of at most ${maximum}`;
}

/** What a schema admits, in words: "a whole number from 1 to 6". */
export function wanted(schema: Schema): string {
  if (schema.const !== undefined) return shown(schema.const);
  if (schema.enum !== undefined) return `one of ${schema.enum.map(shown).join(", ")}`;
  if (schema.anyOf !== undefined) return schema.anyOf.map(wanted).join(", or ");
  switch (schema.type) {
    case "integer":
      return `a whole number${bounds(schema)}`;
    case "number":
      return `a number${bounds(schema)}`;
    case "string":
      return schema.pattern === undefined ? "a text" : `a text that matches ${schema.pattern}`;
    case "boolean":
      return "true or false";
    case "null":
      return "null";
    case "array": {
      const many =
        schema.minItems !== undefined && schema.minItems === schema.maxItems ? `${schema.minItems} values` : "values";
      return `a list of ${many}${schema.items?.type === undefined ? "" : `, each ${wanted(schema.items)}`}`;
    }
    default:
      return "an object in { }";
  }
}

function hasType(value: unknown, type: Schema["type"]): boolean {
  switch (type) {
    case undefined:
      return true;
    case "object":
      return isObject(value);
    case "array":
      return Array.isArray(value);
    case "number":
      return typeof value === "number" && Number.isFinite(value);
    case "integer":
      return typeof value === "number" && Number.isInteger(value);
    case "null":
      return value === null;
    default:
      return typeof value === type;
  }
}

function scalarHolds(value: unknown, schema: Schema): boolean {
  if (schema.const !== undefined && value !== schema.const) return false;
  if (schema.enum !== undefined && !(schema.enum as readonly unknown[]).includes(value)) return false;
  if (typeof value === "number")
    return (
      value >= (schema.minimum ?? -Infinity) &&
      value > (schema.exclusiveMinimum ?? -Infinity) &&
      value <= (schema.maximum ?? Infinity)
    );
  if (typeof value === "string")
    return (
      value.length >= (schema.minLength ?? 0) &&
      (schema.pattern === undefined || new RegExp(schema.pattern, "u").test(value))
    );
  return true;
}

function objectFaults(value: JsonObject, schema: Schema, path: string): Fault[] {
  const known = schema.properties;
  const faults: Fault[] = [];
  for (const key of schema.required ?? [])
    if (!Object.hasOwn(value, key)) faults.push({ path, words: `the key ${shown(key)} is missing` });
  if (known === undefined) return faults;
  for (const [key, member] of Object.entries(value)) {
    const at = memberPath(path, key);
    if (Object.hasOwn(known, key)) faults.push(...schemaFaults(member, known[key], at));
    else if (schema.additionalProperties === false) {
      const near = nearestWord(key, Object.keys(known));
      const hint = near === null ? `known here: ${Object.keys(known).join(", ")}` : `did you mean ${shown(near)}?`;
      faults.push({ path: at, words: `unknown key; ${hint}` });
    }
  }
  return faults;
}

function branchFaults(value: JsonObject, schema: Schema, key: string, path: string): Fault[] {
  const branches = schema.oneOf ?? [];
  if (!Object.hasOwn(value, key)) return [];
  const names = branches.map((branch) => String(branch.properties?.[key]?.const));
  const branch = branches[names.indexOf(String(value[key]))];
  if (branch !== undefined && typeof value[key] === "string") return schemaFaults(value, branch, path);
  const near = typeof value[key] === "string" ? nearestWord(value[key], names) : null;
  const hint = near === null ? `known: ${names.join(", ")}` : `did you mean ${shown(near)}?`;
  return [{ path: memberPath(path, key), words: `${shown(value[key])} is not known; ${hint}` }];
}

/** Everything in `value` that the schema does not admit. */
export function schemaFaults(value: unknown, schema: Schema, path = ""): Fault[] {
  if (schema.anyOf !== undefined) {
    if (schema.anyOf.some((branch) => schemaFaults(value, branch, path).length === 0)) return [];
    // A value of one branch's type is told what that branch misses: "level[1]: …" rather than "level: …".
    const branch = schema.anyOf.find((candidate) => candidate.type === "array" && Array.isArray(value));
    if (branch !== undefined) return schemaFaults(value, branch, path);
    return [{ path, words: `${shown(value)} is not ${wanted(schema)}` }];
  }
  if (!hasType(value, schema.type) || !scalarHolds(value, schema))
    return [{ path, words: `${shown(value)} is not ${wanted(schema)}` }];
  if (Array.isArray(value)) {
    if (value.length < (schema.minItems ?? 0) || value.length > (schema.maxItems ?? Infinity))
      return [{ path, words: `${value.length} values, but wanted is ${wanted(schema)}` }];
    const { items } = schema;
    return items === undefined ? [] : value.flatMap((member, i) => schemaFaults(member, items, memberPath(path, i)));
  }
  if (!isObject(value)) return [];
  const faults = objectFaults(value, schema, path);
  if (schema.discriminator !== undefined)
    faults.push(...branchFaults(value, schema, schema.discriminator.propertyName, path));
  return faults;
}
