import Ajv from "ajv";
import fc from "fast-check";
import { describe, expect, test } from "vitest";
import type { Diagnostic } from "../../../core/diagnostics/entry.ts";
import { CATALOGUE, diagnosticOf } from "../../../core/recipe/catalogue.ts";
import { optionDefaults, optionsInForce } from "../../../core/recipe/options.ts";
import { checkedRecipe, readRecipe } from "../../../core/recipe/read-recipe.ts";
import { RESULT_KEYS, recipeSchema } from "../../../core/recipe/schema.ts";
import { schemaFaults } from "../../../core/recipe/schema-check.ts";
import { EVERY_OPTION, FAKE_CATALOGUE, rowSums } from "./fakes.ts";

const GOOD = {
  isohypse: 1,
  title: "A trial",
  background: { kind: "annual-cycle", harmonics: 4 },
  corrections: [{ file: "a.nc", variable: "hgt", quantity: "geopotential_height", units: "m", level: 500 }],
  results: [
    {
      id: "a",
      diagnostic: "row-sums",
      field: "geopotential_height",
      level: [500, 250],
      period: ["1990-01-01", 12],
      factor: 2.5,
      count: null,
      band: [50, 60],
      waves: [1, 6],
      points: [0, 90.5],
      mean: "incoherent",
      deep: true,
    },
    { id: "b", diagnostic: "row-drums", field: "a.nc/hgt", level: 500 },
  ],
};

function withResult(change: Record<string, unknown>): unknown {
  return { ...GOOD, results: [{ ...GOOD.results[0], ...change }, GOOD.results[1]] };
}

describe("readRecipe", () => {
  test("reads a recipe that uses everything", () => {
    expect(readRecipe(JSON.stringify(GOOD), FAKE_CATALOGUE)).toEqual(GOOD);
  });

  test("names line and key", () => {
    const text = JSON.stringify(withResult({ waves: [1, 6.5] }), null, 1);
    const line = text.split("\n").findIndex((words) => words.includes("6.5")) + 1;
    expect(() => readRecipe(text, FAKE_CATALOGUE)).toThrow(
      `line ${line}, results[0].waves[1]: 6.5 is not a whole number from 1 to 720.`,
    );
  });

  test.each([
    [withResult({ wave: [1, 6] }), 'results[0].wave: unknown key; did you mean "waves"?'],
    [withResult({ zzzzzz: 1 }), "results[0].zzzzzz: unknown key; known here: id, diagnostic, field"],
    [withResult({ diagnostic: "row-sum" }), 'results[0].diagnostic: "row-sum" is not known; did you mean "row-sums"?'],
    [withResult({ diagnostic: 7 }), "results[0].diagnostic: 7 is not known; known: row-sums, row-drums"],
    [withResult({ diagnostic: undefined }), 'results[0]: the key "diagnostic" is missing'],
    [withResult({ id: "a/b" }), "results[0].id"],
    [withResult({ id: "B" }), 'results[1].id: "b" names results[0] already'],
    [withResult({ level: -5 }), "results[0].level: -5 is not a number above 0, or a list of values"],
    [withResult({ level: [500, "x"] }), 'results[0].level[1]: "x" is not a number above 0'],
    [withResult({ period: ["1990"] }), "results[0].period: 1 values, but wanted is a list of 2 values"],
    [withResult({ factor: 11 }), "results[0].factor: 11 is not a number from -10 to 10"],
    [withResult({ count: 2.5 }), "results[0].count: 2.5 is not a whole number from 1 to 6, or null"],
    [withResult({ band: [60, 50] }), "results[0].band: [60, 50] runs downwards"],
    [withResult({ band: 50 }), "results[0].band: 50 is not a list of 2 values, each a number from -90 to 90, or null"],
    [withResult({ mean: "coherant" }), 'results[0].mean: "coherant" is not one of "coherent", "incoherent"'],
    [withResult({ deep: 1 }), "results[0].deep: 1 is not true or false"],
    [{ ...GOOD, isohypse: 2 }, "isohypse: 2 is not 1"],
    [{ ...GOOD, results: [] }, "results: 0 values"],
    [{ ...GOOD, background: { kind: "annual-cycle" } }, 'background: the key "harmonics" is missing'],
    [
      { ...GOOD, background: { kind: "anual-cycle" } },
      'background.kind: "anual-cycle" is not known; did you mean "annual-cycle"?',
    ],
    [{ ...GOOD, background: { kind: "running-mean", days: 0 } }, "background.days: 0 is not a number above 0"],
    [{ ...GOOD, corrections: [{ file: "a.nc" }] }, 'corrections[0]: the key "variable" is missing'],
    [{ ...GOOD, extra: 1 }, "extra: unknown key"],
    [[], "the recipe: [] is not an object in { }"],
  ])("refuses %#: %j", (recipe, words) => {
    expect(() => readRecipe(JSON.stringify(recipe), FAKE_CATALOGUE)).toThrow(words);
    expect(() => checkedRecipe(JSON.parse(JSON.stringify(recipe)), FAKE_CATALOGUE)).toThrow(words);
  });

  test("tells all faults at once, up to a dozen", () => {
    const many = Object.fromEntries(Array.from({ length: 20 }, (_, i) => [`zzzzzz${i}`, 1]));
    expect(() => readRecipe(JSON.stringify(withResult(many)), FAKE_CATALOGUE)).toThrow("… and 8 more.");
  });

  test("a number beyond all bounds is no number", () => {
    const text = JSON.stringify(GOOD).replace('"factor":2.5', '"factor":1e999');
    expect(() => readRecipe(text, FAKE_CATALOGUE)).toThrow("results[0].factor");
  });
});

/** A value somewhere in a document is replaced, dropped, or joined by an unknown key. */
function mutated(value: unknown, path: readonly number[], fresh: unknown): unknown {
  if (typeof value !== "object" || value === null || path.length === 0) return fresh;
  const keys = Object.keys(value);
  if (keys.length === 0) return fresh;
  const key = keys[path[0] % keys.length] as keyof typeof value;
  const member = mutated(value[key], path.slice(1), fresh);
  if (Array.isArray(value))
    return member === undefined
      ? value.filter((_, i) => String(i) !== key)
      : value.map((old, i) => (String(i) === key ? member : old));
  const copy: Record<string, unknown> = { ...value, [key]: member };
  if (member === undefined) delete copy[key];
  return copy;
}

describe("the published schema and the checker", () => {
  // ajv (JSON Schema, draft 7) is the outside judge; `discriminator` is ajv's own keyword and must be named.
  const judge = (catalogue: readonly Diagnostic[]) =>
    new Ajv({ strict: false, discriminator: true, allErrors: true }).compile(recipeSchema(catalogue));

  test.each([
    ["made up", FAKE_CATALOGUE],
    ["real", CATALOGUE],
  ])("ajv takes the schema of the %s catalogue", (_, catalogue) => {
    const schema = recipeSchema(catalogue);
    expect(() => new Ajv({ strict: false, discriminator: true }).compile(schema)).not.toThrow();
  });

  test("agree on 4000 damaged recipes", () => {
    const validate = judge(FAKE_CATALOGUE);
    const schema = recipeSchema(FAKE_CATALOGUE);
    const fresh = fc.oneof(
      fc.constantFrom(
        undefined,
        null,
        true,
        0,
        1,
        -1,
        6,
        7,
        2.5,
        500,
        1e9,
        "",
        "a",
        "none",
        "row-sums",
        "row-drums",
        "coherent",
      ),
      fc.constantFrom<unknown>(
        [],
        {},
        [1, 6],
        [6, 1],
        [1, 2, 3],
        ["1990", "1991"],
        { kind: "none" },
        { kind: "record-mean", days: 5 },
      ),
      fc.jsonValue({ maxDepth: 2 }),
    );
    let refused = 0;
    fc.assert(
      fc.property(fc.array(fc.nat(40), { maxLength: 5 }), fresh, (path, value) => {
        // Twice through JSON, so that both judges see what a file would hold.
        const document: unknown = JSON.parse(JSON.stringify(mutated(GOOD, path, value) ?? null));
        const faults = schemaFaults(document, schema);
        const agreed = validate(document);
        refused += agreed ? 0 : 1;
        expect(faults.length === 0, JSON.stringify({ document, faults, ajv: validate.errors })).toBe(agreed);
      }),
      { numRuns: 4000 },
    );
    expect(refused).toBeGreaterThan(500);
  });
});

describe("options", () => {
  const result = { id: "a", diagnostic: "row-sums", field: "x" };

  test("defaults are filled in, given values kept", () => {
    expect(optionsInForce(rowSums, { ...result, waves: [2, 3], deep: true }, "results[0]")).toEqual({
      factor: 1,
      count: null,
      band: null,
      waves: [2, 3],
      points: null,
      mean: "coherent",
      deep: true,
    });
  });

  test("a wrong value is refused by key", () => {
    expect(() => optionsInForce(rowSums, { ...result, count: 9, band: [3, 1] }, "results[4]")).toThrow(
      /results\[4\]\.count: 9 is not .*\nresults\[4\]\.band: \[3, 1\] runs downwards/,
    );
  });

  test.each(CATALOGUE.map((diagnostic) => [diagnostic.id, diagnostic] as const))(
    "%s: its defaults pass its own checks, and no option takes a result's own key",
    (_, diagnostic) => {
      const defaults = optionDefaults(diagnostic.options);
      expect(optionsInForce(diagnostic, { ...result, ...defaults }, "results[0]")).toEqual(defaults);
      const taken = diagnostic.options.filter(({ name }) => (RESULT_KEYS as readonly string[]).includes(name));
      expect(taken).toEqual([]);
      expect(diagnosticOf(diagnostic.id)).toBe(diagnostic);
    },
  );

  test("an unknown diagnostic is told the nearest", () => {
    expect(() => diagnosticOf("row-sum", FAKE_CATALOGUE)).toThrow("did you mean row-sums?");
    expect(() => diagnosticOf("qqqqqqqqqq", FAKE_CATALOGUE)).toThrow("there are: row-sums, row-drums");
  });

  test("the made-up options cover every kind", () => {
    const kinds = new Set(EVERY_OPTION.map((option) => option.kind));
    expect(kinds).toEqual(new Set(["number", "integer", "range", "list", "choice", "boolean"]));
  });
});
