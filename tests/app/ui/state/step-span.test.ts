import { expect, test } from "vitest";
import { emptyCase } from "../../../../app/ui/case/case.ts";
import { LOOK_BACK, ribbonSpan, spanPeriod, stepBefore, waveSpan } from "../../../../app/ui/case/step-span.ts";
import { waveRecipe } from "../../../../app/ui/case/wave-recipe.ts";
import { stepsOfPeriod } from "../../../../core/field/period.ts";
import { checkedRecipe } from "../../../../core/recipe/read-recipe.ts";
import { dailySteps, field, recordSteps } from "./fields.ts";

test("a season is shown whole", () => {
  expect(ribbonSpan(dailySteps(60), 30)).toEqual([0, 60]);
  expect(ribbonSpan(dailySteps(92), 91)).toEqual([0, 92]);
  expect(ribbonSpan(recordSteps(1), 0)).toEqual([0, 1]);
});

test("a page of a long record holds its step, sixty days, and room on either side where there is any", () => {
  for (const [n, perDay] of [
    [14610, 1],
    [4000, 4],
    [5000, 24],
  ] as const) {
    const steps = dailySteps(n, perDay);
    for (let step = 0; step < n; step += 7) {
      const [from, to] = ribbonSpan(steps, step);
      expect(from >= 0 && to <= n).toBe(true);
      expect(to - from).toBe(Math.min(240, 60 * perDay));
      expect(step >= from && step < to).toBe(true);
      const quarter = (to - from) / 4;
      expect(step - from >= quarter || from === 0).toBe(true);
      expect(to - step >= quarter || to === n).toBe(true);
    }
  }
});

test("the waves look back twenty days before the ribbon", () => {
  const steps = dailySteps(1000, 4);
  const [from, to] = waveSpan(steps, [400, 640]);
  expect(to).toBe(640);
  expect(steps.values[400] - steps.values[from]).toBe(LOOK_BACK);
  expect(waveSpan(steps, [20, 260])).toEqual([0, 260]);
  expect(waveSpan(recordSteps(200), [30, 90])).toEqual([30, 90]);
});

test("a span as a period selects the very same steps", () => {
  for (const steps of [dailySteps(400), dailySteps(400, 4), recordSteps(400)]) {
    for (const span of [
      [0, 60],
      [113, 240],
      [399, 400],
    ] as const) {
      expect(stepsOfPeriod(steps, spanPeriod(steps, span))).toEqual(span);
    }
    expect(spanPeriod(steps, [0, 400])).toBeUndefined();
  }
});

test("the recipe is one that batch takes, with what belongs to its file and nothing else", () => {
  const kept = {
    ...emptyCase(),
    level: 500,
    corrections: [
      { file: "winter.nc", variable: "z", units: "m" },
      { file: "other.nc", variable: "t", units: "K" },
    ],
  };
  const recipe = checkedRecipe(waveRecipe(kept, field({ steps: dailySteps(400) }), [10, 90]));
  expect(recipe.corrections).toEqual([kept.corrections[0]]);
  expect(recipe.results[0]).toMatchObject({
    diagnostic: "zonal-waves",
    field: "winter.nc/z",
    level: 500,
    band: [55, 55],
    waves: [1, 8],
    of: "anomaly",
    drift_days: 10,
    period: ["2001-01-11T00:00:00Z", "2001-03-31T00:00:00Z"],
  });
  const whole = checkedRecipe(waveRecipe({ ...kept, level: null, corrections: [] }, field(), [0, 60]));
  expect(whole.results[0]).not.toHaveProperty("period");
  expect(whole.results[0]).not.toHaveProperty("level");
  expect(whole).not.toHaveProperty("corrections");
});

test("yesterday is a day ago, or else the step before", () => {
  expect(stepBefore(dailySteps(10, 4), 7)).toEqual({ step: 3, isDay: true });
  expect(stepBefore(dailySteps(10, 4), 2)).toEqual({ step: 1, isDay: false });
  expect(stepBefore(dailySteps(10), 0)).toBe(null);
  expect(stepBefore(recordSteps(3), 2)).toEqual({ step: 1, isDay: false });
  const pentads = { ...dailySteps(10), values: dailySteps(10).values.map((day) => day * 5) };
  expect(stepBefore(pentads, 4)).toEqual({ step: 3, isDay: false });
});
