import { expect, test } from "vitest";
import { LIBRARIES } from "../../../app/codecs/libraries.ts";
import type { FileContents, OpenFile } from "../../../core/formats/dataset.ts";
import { openFile } from "../../../core/formats/open-file.ts";
import { CATALOGUE } from "../../../core/recipe/catalogue.ts";
import { runRecipe } from "../../../core/recipe/engine.ts";
import { stackedOutcome } from "../../../core/recipe/member-outcomes.ts";
import { OwnThreadCrew } from "../../../core/recipe/own-thread-crew.ts";
import type { Recipe } from "../../../core/recipe/recipe.ts";
import { writtenSource } from "../formats/written.ts";

const N_LON = 16;
const MEMBERS = [3, 0, 7];
const rad = Math.PI / 180;

/** Wave 2 of amplitude 10 (m + 1) with its ridge at 15°, and a mean of 5000 + m + 100 t, on member m. */
function ensemble(name: string, members: readonly number[] | null) {
  const data: number[] = [];
  for (let t = 0; t < 3; t++)
    for (const m of members ?? [5])
      for (let row = 0; row < 3; row++)
        for (let i = 0; i < N_LON; i++)
          data.push(5000 + m + 100 * t + 10 * (m + 1) * Math.cos(2 * ((i * 360) / N_LON - 15) * rad));
  return writtenSource(
    {
      dimensions: { time: 3, ...(members === null ? {} : { member: members.length }), lat: 3, lon: N_LON },
      attributes: {},
      variables: [
        {
          name: "time",
          dims: ["time"],
          attributes: { units: "days since 2001-01-01" },
          data: Float64Array.of(0, 1, 2),
        },
        ...(members === null
          ? []
          : [{ name: "member", dims: ["member"], attributes: {}, data: Int32Array.from(members) }]),
        { name: "lat", dims: ["lat"], attributes: { units: "degrees_north" }, data: Float64Array.of(40, 50, 60) },
        {
          name: "lon",
          dims: ["lon"],
          attributes: { units: "degrees_east" },
          data: Float64Array.from({ length: N_LON }, (_, i) => (i * 360) / N_LON),
        },
        {
          name: "z",
          dims: ["time", ...(members === null ? [] : ["member"]), "lat", "lon"],
          attributes: { units: "gpm", standard_name: "geopotential_height" },
          data: Float64Array.from(data),
        },
      ],
    },
    name,
  );
}

function run(files: readonly OpenFile[], recipe: Omit<Recipe, "isohypse">) {
  const contents: FileContents[] = files.map((file) => file.contents);
  return runRecipe({ isohypse: 1, ...recipe }, contents, new OwnThreadCrew(files, CATALOGUE), { program: "test" });
}
const waves = { id: "w", diagnostic: "zonal-waves", field: "geopotential_height", waves: [2, 2] } as const;

test("every member is computed, or those that are asked for, in that order", async () => {
  const file = await openFile(ensemble("e.nc", MEMBERS), LIBRARIES);
  for (const [member, want] of [
    [undefined, MEMBERS],
    [
      [7, 3],
      [7, 3],
    ],
    [0, [0]],
  ] as const) {
    const { results, failed } = await run([file], {
      results: [{ ...waves, ...(member === undefined ? {} : { member }) }],
    });
    expect(failed).toEqual([]);
    const [result] = results;
    expect(result?.coordinates[0]).toMatchObject({ name: "member", values: Float64Array.from(want) });
    const amplitude = result?.variables.find(({ name }) => name === "amplitude");
    expect(amplitude?.dims).toEqual(["member", "time", "latitude", "wavenumber"]);
    expect(amplitude?.shape).toEqual([want.length, 3, 3, 1]);
    // Sums of 16 numbers up to 5300, each term rounded: 16 · 2⁻⁵³ · 5300 · 4
    want.forEach((m, i) => {
      for (let j = 0; j < 9; j++)
        expect(Math.abs((amplitude?.data[9 * i + j] ?? 0) - 10 * (m + 1))).toBeLessThan(4e-11);
    });
  }
});

test("a member alone gives the very numbers that it has in a file of its own", async () => {
  const [all, one] = [
    await openFile(ensemble("e.nc", [5, 6]), LIBRARIES),
    await openFile(ensemble("one.nc", null), LIBRARIES),
  ];
  const background = { kind: "record-mean" } as const;
  const asked = { ...waves, of: "anomaly", point: [0, 50] } as const;
  const { results: stacked } = await run([all], { background, results: [{ ...asked, member: 5 }] });
  const { results: alone } = await run([one], { background, results: [asked] });
  expect(stacked[0]?.variables.length).toBe(alone[0]?.variables.length);
  alone[0]?.variables.forEach((variable, v) => {
    expect(stacked[0]?.variables[v]?.data, variable.name).toEqual(variable.data);
  });
});

test("members that are not there, or asked twice, or of a field without any, are refused in words", async () => {
  const file = await openFile(ensemble("e.nc", MEMBERS), LIBRARIES);
  const plain = await openFile(ensemble("one.nc", null), LIBRARIES);
  const words = async (open: OpenFile, member: number | number[]) =>
    (await run([open], { results: [{ ...waves, member }] })).failed[0]?.words;
  expect(await words(file, 1)).toBe("e.nc/z has no member 1; it has 3, 0, 7");
  expect(await words(file, [0, 0])).toBe('"member" names a member twice: 0, 0');
  expect(await words(plain, 0)).toContain("one.nc/z has no members");
});

test("results of different shapes are not stacked", () => {
  const outcome = (n: number) => ({
    coordinates: [],
    notes: [],
    variables: [{ name: "x", title: "x", units: "1", dims: ["n"], shape: [n], data: new Float64Array(n) }],
  });
  expect(() => stackedOutcome([outcome(1), outcome(2)], [0, 1])).toThrow("x is not of one shape in all members");
});
