import { expect, test } from "vitest";
import { longName, numbersOf, textOf } from "../../../../core/formats/cf/attributes.ts";

test("text is trimmed, and nothing else is text", () => {
  expect(textOf({ units: " m s-1\n" }, "units")).toBe("m s-1");
  expect(textOf({ units: 1 }, "units")).toBeUndefined();
  expect(textOf({ units: [1, 2] }, "units")).toBeUndefined();
  expect(textOf({}, "units")).toBeUndefined();
});

test("numbers: one, several, or text that is one", () => {
  expect(numbersOf({ a: 0 }, "a")).toEqual([0]);
  expect(numbersOf({ a: [1, 2] }, "a")).toEqual([1, 2]);
  expect(numbersOf({ a: "-999." }, "a")).toEqual([-999]);
  for (const text of ["", " ", "none", "1 2", "NaN", "Infinity"]) expect(numbersOf({ a: text }, "a"), text).toEqual([]);
  expect(numbersOf({}, "a")).toEqual([]);
});

test("what people call a variable: its long name, else its standard name, else its name", () => {
  const variable = { name: "z", type: "float32", dims: [], shape: [] } as const;
  expect(longName({ ...variable, attributes: { long_name: "Height", standard_name: "geopotential_height" } })).toBe(
    "Height",
  );
  expect(longName({ ...variable, attributes: { standard_name: "geopotential_height" } })).toBe("geopotential_height");
  expect(longName({ ...variable, attributes: { long_name: 3 } })).toBe("z");
  expect(longName({ ...variable, attributes: { long_name: " " } })).toBe("z");
});
