import { expect, test } from "vitest";
import { type Case, emptyCase } from "../../../../app/ui/case/case.ts";
import { caseOfText, caseText } from "../../../../app/ui/case/case-text.ts";

const FULL: Case = {
  ...emptyCase("night"),
  title: "Storm of February",
  files: [
    { name: "winter.nc", size: 1234, place: "/data/winter.nc" },
    { name: "dropped.nc", size: 99, place: null },
  ],
  corrections: [{ file: "winter.nc", variable: "foo", quantity: "eastward_wind", units: "kt", level: 300 }],
  field: "winter.nc/z",
  level: 500,
  background: { kind: "period-mean", from: "2001-01-01", to: "2001-01-31" },
  waves: { of: "field", band: [45, 65] },
  cursor: { lat: 57.5, lon: -17.5, step: 39 },
  chart: { kind: "belt", hemisphere: "south", turn: 30, cut: -100, shading: "field" },
};

/** The case's text with one piece replaced. */
function changed(from: string, to: string): string {
  const text = caseText(FULL);
  expect(text).toContain(from);
  return text.replace(from, to);
}
const words = (text: string): string => {
  try {
    caseOfText(text, "a.json");
  } catch (error) {
    return (error as Error).message;
  }
  return "it was taken";
};

test("a case comes back from its text as it was", () => {
  expect(caseOfText(caseText(FULL), "a.json")).toEqual(FULL);
  expect(caseOfText(caseText(emptyCase()), "a.json")).toEqual(emptyCase());
});

test("every kind of background is kept", () => {
  for (const background of [
    { kind: "none" },
    { kind: "record-mean" },
    { kind: "annual-cycle", harmonics: 3 },
    { kind: "running-mean", days: 15 },
  ] as const)
    expect(caseOfText(caseText({ ...FULL, background }), "a.json").background).toEqual(background);
});

test("what is wrong is named by line and key, and the open case stays", () => {
  const line =
    caseText(FULL)
      .split("\n")
      .findIndex((text) => text.includes('"lat": 57.5')) + 1;
  expect(words(changed('"lat": 57.5', '"lat": 157.5'))).toBe(
    `a.json is not a case that can be opened: line ${line}, cursor.lat: 157.5 is not a number from -90 to 90. The open case stays.`,
  );
  expect(words(changed('"kind": "belt"', '"kind": "globe"'))).toContain("chart.kind");
});

test("keys that are unknown or missing are refused", () => {
  expect(words(changed('"theme"', '"themes"'))).toMatch(/themes: unknown key; did you mean "theme"\?/);
  expect(words(changed('  "field": "winter.nc/z",\n', ""))).toContain('the key "field" is missing');
});

test("numbers that JSON cannot hold well are refused", () => {
  expect(words(changed('"step": 39', '"step": 3.5'))).toContain("cursor.step: 3.5 is not a whole number");
  expect(words(changed('"step": 39', '"step": -1'))).toContain("cursor.step");
  expect(words(changed('"size": 99', '"size": "99"'))).toContain("files[1].size");
});

test("a band that runs downwards is refused", () => {
  expect(words(changed("45,\n      65", "65,\n      45"))).toContain("waves.band: the southern end comes first");
});

test("a text that is no JSON says where it stops being it", () => {
  expect(words(caseText(FULL).slice(0, 200))).toMatch(/line 12: not JSON: found/);
  expect(words("")).toContain("line 1: not JSON");
});

test("a recipe is told from a case", () => {
  expect(words('{"isohypse": 1, "results": []}')).toContain("it is a recipe");
});
