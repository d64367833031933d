import { describe, expect, test } from "vitest";
import { levelAxis, statedLevel } from "../../../../core/formats/cf/level-axis.ts";
import { openNetcdfClassic } from "../../../../core/formats/netcdf/classic-store.ts";
import type { WrittenAttribute, WrittenVariable } from "../../../../core/formats/netcdf/write.ts";
import type { StoredVariable } from "../../../../core/formats/variable-store.ts";
import { writtenSource } from "../written.ts";

type Attributes = Readonly<Record<string, WrittenAttribute>>;

async function storeOf(variables: readonly WrittenVariable[], sizes: Readonly<Record<string, number>> = {}) {
  return openNetcdfClassic(writtenSource({ dimensions: { x: 1, ...sizes }, attributes: {}, variables }));
}

/** Levels of an axis that holds these numbers. */
async function axis(stored: readonly number[], attributes: Attributes): Promise<number[]> {
  const lev = { name: "lev", dims: ["lev"], attributes, data: Float64Array.from(stored) };
  const store = await storeOf([lev], { lev: stored.length });
  return [...(await levelAxis(store, "lev", store.variables[0]))];
}

/** The level of a field without a level axis, of this name and these attributes, beside these variables. */
async function stated(name: string, attributes: Attributes, beside: readonly WrittenVariable[] = []) {
  const field = { name, dims: ["x"], attributes, data: Float32Array.of(0) };
  const store = await storeOf([...beside, field], { one: 1, two: 2 });
  const levels = await statedLevel(store, store.variables.at(-1) as StoredVariable);
  return levels === null ? null : levels[0];
}
const scalar = (units: string, value: number, dims: readonly string[] = []): WrittenVariable => ({
  name: "p0",
  dims,
  attributes: { units },
  data: dims[0] === "two" ? Float64Array.of(value, 1) : Float64Array.of(value),
});

describe("an axis", () => {
  test.each([
    [[1000, 850, 500.5], "hPa", [1000, 850, 500.5]],
    [[250, 500], "millibars", [250, 500]],
    [[100_000, 92_500, 30, 70], "Pa", [1000, 925, 0.3, 0.7]],
    [[100, 33.33], "kPa", [1000, 333.3]],
  ])("%j %s", async (stored, units, hPa) => {
    // Without the last digits that a conversion leaves: 70 Pa · 0.01 alone is 0.7000000000000001.
    expect(await axis(stored, { units })).toEqual(hPa);
  });

  test.each([
    [[0.9], { units: "1" }, 'its levels (lev) are in "1", not in a pressure (hpa, pa, kpa)'],
    [[10], { units: "m" }, 'are in "m", not in a pressure'],
    [[500], {}, "are in no stated units, not in a pressure"],
    [[500, 0], { units: "hPa" }, "level 2 of its 2 (lev) is 0, no pressure"],
    [[500, -9], { units: "hPa", _FillValue: -9 }, "level 2 of its 2 (lev) is NaN, no pressure"],
    [[Number.POSITIVE_INFINITY], { units: "hPa" }, "level 1 of its 1 (lev) is Infinity, no pressure"],
  ] as const)("%j in %j is refused", async (stored, attributes, words) => {
    await expect(axis(stored, attributes)).rejects.toMatchObject({
      name: "MetadataError",
      message: expect.stringContaining(words),
    });
  });

  test("packed levels are unpacked first; a dimension without a variable has no units", async () => {
    expect(await axis([-500, 0], { units: "hPa", scale_factor: 0.5, add_offset: 500 })).toEqual([250, 500]);
    await expect(levelAxis(await storeOf([]), "lev", undefined)).rejects.toThrow("are in no stated units");
  });
});

describe("a single level, stated", () => {
  test("by a scalar coordinate that the field names (CF conventions 5.7), in any pressure", async () => {
    const named = { coordinates: "time p0" };
    expect(await stated("z", named, [scalar("Pa", 70)])).toBe(0.7);
    expect(await stated("z", named, [scalar("hPa", 500, ["one"])])).toBe(500);
    expect(await stated("z", { coordinates: "time" }, [scalar("hPa", 500)])).toBeNull();
    expect(await stated("z", {}, [scalar("hPa", 500)])).toBeNull();
    expect(await stated("z", named, [scalar("m", 2)])).toBeNull();
    expect(await stated("z", named, [scalar("hPa", 500, ["two"])])).toBeNull();
    for (const bad of [0, -500, Number.NaN]) expect(await stated("z", named, [scalar("hPa", bad)])).toBeNull();
  });

  test("the coordinate before the attribute, the attribute before the words, the words before the name", async () => {
    const named = { coordinates: "p0", level: 300, long_name: "height at 400 hPa" };
    expect(await stated("z850", named, [scalar("hPa", 500)])).toBe(500);
    expect(await stated("z850", named)).toBe(300);
    expect(await stated("z850", { long_name: "height at 400 hPa" })).toBe(400);
    expect(await stated("z850", { long_name: "height" })).toBe(850);
  });

  test.each([
    ["z", { level: "500" }, 500],
    ["z", { pressure: 250 }, 250],
    ["z", { pressure_level: Float32Array.of(850) }, 850],
    ["z", { level: "500 hPa" }, 500],
    ["z", { level: 0 }, null],
    ["z", { level: 50_000 }, null],
    ["z", { long_name: "geopotential at 500-hPa" }, 500],
    ["z", { long_name: "height, 250mb" }, 250],
    ["z", { long_name: "height", level_desc: "Pressure Level: 10 millibars" }, 10],
    ["z", { long_name: "500 hPascals" }, null],
    ["z", { long_name: "temperature at 2 m" }, null],
    ["u_250", {}, 250],
    ["u250hPa", {}, 250],
    ["ua10mb", {}, 10],
    ["Z1000", {}, 1000],
    ["z20", {}, 20],
    ["u10", {}, null],
    ["v100", { long_name: "100 metre V wind component" }, null],
    ["u_100m", {}, null],
    ["z2000", {}, null],
    ["z5", {}, null],
    ["500z", {}, null],
    ["z", {}, null],
  ] as const)("%s %j stands at %s hPa", async (name, attributes, hPa) => {
    expect(await stated(name, attributes)).toBe(hPa);
  });
});
