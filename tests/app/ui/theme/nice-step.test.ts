import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { niceStep, shadingStep } from "../../../../app/ui/theme/nice-step.ts";

describe("niceStep", () => {
  test.each([
    [1, 1],
    [1.01, 1.5],
    [55, 60],
    [61, 80],
    [0.0021, 0.0025],
    [9.1, 10],
    [100, 100],
  ])("%d rounds up to %d", (least, expected) => {
    expect(niceStep(least)).toBe(expected);
  });

  test.each([0, -3, Number.NaN, Number.POSITIVE_INFINITY])("%d has no step; 1 stands in", (least) => {
    expect(niceStep(least)).toBe(1);
  });

  test("never under what was asked, never over half as much again", () => {
    fc.assert(
      fc.property(fc.double({ min: 1e-12, max: 1e12, noNaN: true }), (least) => {
        const step = niceStep(least);
        // 1e-9: the slack that lets 0.3 count as 3 · 10⁻¹; 1e-6: six digits are kept. 1 to 1.5 is the widest gap.
        expect(step).toBeGreaterThanOrEqual(least * (1 - 2e-6));
        expect(step).toBeLessThanOrEqual(least * 1.5 * (1 + 2e-6));
      }),
    );
  });
});

describe("shadingStep", () => {
  test("99 of 100 values fall within the ramp, whatever the outermost is", () => {
    const values = Float32Array.from({ length: 1000 }, (_, i) => (i % 2 === 0 ? i : -i) * 0.45);
    values[999] = 1e6;
    const step = shadingStep(values);
    expect(step).toBe(60); // 0.45 · 990 / 7.5 = 59.4
    const outside = values.filter((value) => Math.abs(value) > 7.5 * step).length;
    expect(outside).toBeLessThanOrEqual(10);
  });

  test("missing values do not count, the input stays as it was, and nothing at all gives 1", () => {
    const values = Float32Array.of(Number.NaN, 15, Number.NaN, -7.5);
    expect(shadingStep(values)).toBe(2);
    expect(values).toEqual(Float32Array.of(Number.NaN, 15, Number.NaN, -7.5));
    expect(shadingStep(Float32Array.of(Number.NaN))).toBe(1);
    expect(shadingStep(new Float32Array(9))).toBe(1);
  });

  test("a long record is sampled, and the step is that of the whole", () => {
    const values = Float32Array.from({ length: 1_000_003 }, (_, i) => 300 * Math.sin(i * 0.7));
    // 99 % of |300 sin| lie under 300 · sin(0.99 · 90°) = 299.96; / 7.5 = 39.99.
    expect(shadingStep(values)).toBe(40);
  });
});
