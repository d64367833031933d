import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { jsonText } from "../../../core/recipe/json-text.ts";

describe("jsonText", () => {
  test("reads whatever JSON.parse reads, to the same value (ECMA-404 as Node implements it)", () => {
    fc.assert(
      fc.property(fc.json({ maxDepth: 6 }), fc.nat(3), (text, indent) => {
        const pretty = JSON.stringify(JSON.parse(text), null, indent);
        expect(jsonText(text).value).toEqual(JSON.parse(text));
        expect(jsonText(pretty).value).toEqual(JSON.parse(text));
      }),
    );
  });

  test("refuses whatever JSON.parse refuses: texts with one character changed", () => {
    fc.assert(
      fc.property(
        fc.json({ maxDepth: 3 }),
        fc.nat(),
        fc.constantFrom(...'{}[],:"\\x01-.e\n\t '),
        (text, at, character) => {
          const place = at % text.length;
          const changed = text.slice(0, place) + character + text.slice(place + 1);
          let isJson = true;
          try {
            JSON.parse(changed);
          } catch {
            isJson = false;
          }
          if (!isJson) expect(() => jsonText(changed)).toThrow(/^line \d+: not JSON: /);
        },
      ),
      { numRuns: 500 },
    );
  });

  test("knows the line of every value", () => {
    const { lines } = jsonText('{\n  "a": 1,\n  "b c":\n    [true,\n     {"d": null}]\n}');
    expect([...lines]).toEqual([
      ["", 1],
      ["a", 2],
      ['"b c"', 4],
      ['"b c"[0]', 4],
      ['"b c"[1]', 5],
      ['"b c"[1].d', 5],
    ]);
  });

  test.each([
    ['{"a": 1,\n "a": 2}', 'line 2: not JSON: found ":", but the key "a" may stand only once in an object.'],
    ['{"a": 1,}', 'line 1: not JSON: found "}", but a key in double quotes is wanted.'],
    ["[1 2]", 'line 1: not JSON: found "2", but a list goes on with a comma or ends with ].'],
    ["\n\n[01]", "line 3: not JSON"],
    ["", "line 1: not JSON: the text ends, but a value is wanted"],
    ["[1] x", "nothing more may follow the closing bracket"],
    ['["a\nb"]', "a text in double quotes that closes on its line is wanted"],
    ["[".repeat(80), "brackets may be at most 64 deep"],
  ])("says where %j goes wrong", (text, words) => {
    expect(() => jsonText(text)).toThrow(words);
  });

  test("takes a byte order mark, and keeps __proto__ a key", () => {
    const { value } = jsonText('\uFEFF{"__proto__": {"polluted": 1}}');
    expect(Object.keys(value as object)).toEqual(["__proto__"]);
    expect(({} as Record<string, unknown>).polluted).toBeUndefined();
  });
});
