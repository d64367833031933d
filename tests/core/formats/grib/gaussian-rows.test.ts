import { readFileSync } from "node:fs";
import { expect, test } from "vitest";
import { gaussianLatitudes } from "../../../../core/grid/gaussian-rows.ts";
import { openSmall } from "./small-files.ts";

/** Rows by numpy (reference/make_values.py); beyond N = 48 every N/8-th. */
const REFERENCE = JSON.parse(readFileSync(new URL("reference/gaussian.json", import.meta.url), "utf8")) as Readonly<
  Record<string, readonly number[]>
>;

/**
 * Degrees by which a row may differ: the recurrence of 2N steps and the eigenvalues behind the reference each move a zero
 * by 2N · 2⁻⁵³ at most, and the arcsine makes 1/cos φ of it.
 */
function limit(parallels: number, latitude: number): number {
  const radians = (latitude * Math.PI) / 180;
  return ((2 * 2 * parallels * 2 ** -53) / Math.cos(radians)) * (180 / Math.PI);
}

test.each(Object.keys(REFERENCE).map(Number))("Gaussian rows of N = %i", (parallels) => {
  const rows = gaussianLatitudes(parallels);
  expect(rows.length).toBe(2 * parallels);
  const stride = parallels <= 48 ? 1 : Math.floor(parallels / 8);
  REFERENCE[parallels]?.forEach((latitude, k) => {
    const own = rows[k * stride] as number;
    const most = limit(parallels, latitude);
    if (!(Math.abs(own - latitude) <= most)) expect.fail(`row ${k * stride} is ${own}, not ${latitude} ± ${most}`);
  });
  expect(rows.every((latitude, i) => latitude === -(rows[rows.length - 1 - i] as number))).toBe(true);
});

test.each([0, -1, 2.5, 4001, Number.NaN])("N = %d is no Gaussian grid", (parallels) => {
  expect(() => gaussianLatitudes(parallels)).toThrow(/is none/);
});

test("a Gaussian file has the exact rows, not the rounded ends of its header; a part has its own", async () => {
  const all = gaussianLatitudes(8);
  for (const edition of [1, 2]) {
    const whole = (await openSmall(`gaussian${edition}`)).contents.fields[0];
    expect(whole?.grid.lat).toEqual(all);
    const part = (await openSmall(`gaussian_part${edition}`)).contents.fields[0];
    // Rows 4 to 7 from the north.
    expect(part?.grid.lat).toEqual(all.slice(9, 13));
    const off = (await openSmall(`gaussian_off${edition}`)).contents;
    expect(off.fields).toEqual([]);
    expect(off.leftOut[0]?.why).toMatch(/its first row at .*° is none of a Gaussian grid of 8 rows/);
  }
});
