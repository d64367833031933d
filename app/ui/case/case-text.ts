import { DataError } from "../../../core/errors.ts";
import { QUANTITIES } from "../../../core/field/quantity.ts";
import { jsonText } from "../../../core/recipe/json-text.ts";
import { BACKGROUND_SCHEMA, type Schema } from "../../../core/recipe/schema.ts";
import { schemaFaults } from "../../../core/recipe/schema-check.ts";
import type { Case } from "./case.ts";

const MOST_FAULTS = 6;
const TEXT: Schema = { type: "string", minLength: 1 };

function closed(properties: Readonly<Record<string, Schema>>, optional: readonly string[] = []): Schema {
  const required = Object.keys(properties).filter((key) => !optional.includes(key));
  return { type: "object", properties, required, additionalProperties: false };
}

function orNull(schema: Schema): Schema {
  return { anyOf: [schema, { type: "null" }] };
}

const LATITUDE: Schema = { type: "number", minimum: -90, maximum: 90 };
const LONGITUDE: Schema = { type: "number", minimum: -360, maximum: 360 };

const CASE_SCHEMA: Schema = closed(
  {
    isohypse: { const: 1 },
    kind: { const: "case" },
    title: { type: "string" },
    files: {
      type: "array",
      items: closed({ name: TEXT, size: { type: "integer", minimum: 0 }, place: orNull(TEXT) }),
    },
    corrections: {
      type: "array",
      items: closed(
        {
          file: TEXT,
          variable: TEXT,
          quantity: { type: "string", enum: Object.keys(QUANTITIES) },
          units: TEXT,
          level: { type: "number", exclusiveMinimum: 0 },
          apart: { type: "boolean" },
        },
        ["quantity", "units", "level", "apart"],
      ),
    },
    field: orNull(TEXT),
    level: orNull({ type: "number", exclusiveMinimum: 0 }),
    member: orNull({ type: "integer", minimum: 0 }),
    background: BACKGROUND_SCHEMA,
    waves: closed({
      of: { type: "string", enum: ["anomaly", "field"] },
      band: { type: "array", items: LATITUDE, minItems: 2, maxItems: 2 },
    }),
    cursor: closed({ lat: LATITUDE, lon: LONGITUDE, step: { type: "integer", minimum: 0 } }),
    question: { type: "string", enum: ["pattern"] },
    chart: closed({
      kind: { type: "string", enum: ["hemisphere", "belt"] },
      hemisphere: { type: "string", enum: ["north", "south"] },
      turn: LONGITUDE,
      cut: LONGITUDE,
      shading: { type: "string", enum: ["anomaly", "field"] },
    }),
    theme: { type: "string", enum: ["light", "night"] },
  },
  // Cases of before there were members are still good.
  ["member"],
);

/** The case as its file: JSON that a person can read. */
export function caseText(kept: Case): string {
  return `${JSON.stringify(kept, null, 2)}\n`;
}

/** True for a text that means to be a case: cases and recipes are opened by the same button as data. */
export function looksLikeCase(text: string): boolean {
  return /^\uFEFF?\s*\{/.test(text);
}

/**
 * Read a case from its text.
 *
 * @param name File name, for the words.
 * @throws DataError naming line and key of what is wrong.
 */
export function caseOfText(text: string, name: string): Case {
  const refuse = (words: string): never => {
    throw new DataError("FormatError", `${name} is not a case that can be opened: ${words} The open case stays.`);
  };
  let read: ReturnType<typeof jsonText>;
  try {
    read = jsonText(text);
  } catch (error) {
    return refuse(error instanceof Error ? error.message : String(error));
  }
  const { value, lines } = read;
  if (typeof value === "object" && value !== null && "results" in value)
    return refuse("it is a recipe. Recipes are run in batch: npm run batch -- RECIPE.json FILE… --out FOLDER.");
  const faults = schemaFaults(value, CASE_SCHEMA);
  if (faults.length > 0) {
    const words = faults.slice(0, MOST_FAULTS).map(({ path, words }) => {
      const line = lines.get(path);
      return `${line === undefined ? "" : `line ${line}, `}${path === "" ? "the case" : path}: ${words}.`;
    });
    if (faults.length > MOST_FAULTS) words.push(`… and ${faults.length - MOST_FAULTS} more.`);
    return refuse(words.join(" "));
  }
  const found = { ...(value as object), member: (value as { member?: number | null }).member ?? null } as Case;
  if (found.waves.band[0] > found.waves.band[1])
    return refuse(`line ${lines.get("waves.band")}, waves.band: the southern end comes first.`);
  return found;
}
