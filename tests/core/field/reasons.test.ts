import { expect, test } from "vitest";
import { REASONS, reasonCode } from "../../../core/field/reasons.ts";

test("the codes that stand in result files count from 0, and 0 is a plain valid number", () => {
  expect(REASONS.map(({ code }) => code)).toEqual(REASONS.map((_, i) => i));
  expect(REASONS[0]).toMatchObject({ key: "valid", value: true });
  expect(REASONS.length).toBeLessThan(128); // they are written as signed bytes
});

test("each reason has a key and words of its own, and its code is found by the key", () => {
  expect(new Set(REASONS.map(({ key }) => key)).size).toBe(REASONS.length);
  expect(new Set(REASONS.map(({ words }) => words)).size).toBe(REASONS.length);
  for (const { key, code } of REASONS) expect(reasonCode(key)).toBe(code);
});
