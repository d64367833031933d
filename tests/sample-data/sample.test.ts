import { readFileSync } from "node:fs";
import { expect, test } from "vitest";
import { LIBRARIES } from "../../app/codecs/libraries.ts";
import { daysOfText } from "../../core/field/calendar.ts";
import { memorySource } from "../../core/formats/memory-source.ts";
import { classicFile } from "../../core/formats/netcdf/write.ts";
import { openFile } from "../../core/formats/open-file.ts";
import { nearestColumn, nearestRow } from "../../core/grid/rows.ts";
import { invention } from "../../sample-data/model/invention.ts";
import { sampleFile } from "../../sample-data/model/sample-file.ts";

const FILE = new URL("../../sample-data/invented-winter.nc", import.meta.url);
const PLANTED = JSON.parse(
  readFileSync(new URL("../../sample-data/invented-winter.json", import.meta.url), "utf8"),
) as {
  block: { longitude: number; latitude: number; onset: string; end: string };
};

test("the sample case is what its maker makes, byte for byte, and says that it is invented", {
  timeout: 240_000,
}, async () => {
  const { days, planted } = invention(60);
  expect(planted).toEqual(PLANTED);
  const made = Buffer.concat([...classicFile(sampleFile(days))]);
  const kept = readFileSync(FILE);
  expect(made.length).toBe(kept.length);
  expect(made.equals(kept)).toBe(true);
  const { contents } = await openFile(memorySource("sample.nc", Uint8Array.from(kept)), LIBRARIES);
  expect(`${contents.about.title} ${contents.about.comment}`).toMatch(/invented/i);
});

test("the block that was put in reverses the gradient where and when it should", async () => {
  const file = await openFile(memorySource("sample.nc", Uint8Array.from(readFileSync(FILE))), LIBRARIES);
  const field = file.contents.fields.find(({ quantity }) => quantity === "geopotential_height");
  if (field === undefined) throw new Error("no height in the sample");
  const { lat, lon } = field.grid;
  const level = field.levels?.indexOf(500) ?? 0;
  // Tibaldi & Molteni 1990, Tellus 42A, 343, without offsets: GHGS > 0 and GHGN < −10 m per degree about 60°.
  const [south, middle, north] = [40, 60, 80].map((latitude) => nearestRow(lat, latitude)) as [number, number, number];
  const blocked = async (day: number, longitude: number): Promise<boolean> => {
    const { data } = await file.read(field.key, { times: [day, day + 1], levels: [level] });
    const z = (row: number) => data[row * lon.length + nearestColumn(lon, longitude)] as number;
    const rise = (from: number, to: number) => (z(to) - z(from)) / ((lat[to] as number) - (lat[from] as number));
    return rise(south, middle) > 0 && rise(middle, north) < -10;
  };
  const dayOf = (text: string) => {
    const days = daysOfText(text, field.steps.calendar);
    return field.steps.values.findIndex((value) => Math.abs(value - days) < 1e-6);
  };
  const { longitude, onset, end } = PLANTED.block;
  const [first, last] = [dayOf(onset), dayOf(end)];
  const found: number[] = [];
  for (let day = 0; day < field.steps.values.length; day++)
    for (const off of [-10, -5, 0, 5, 10])
      if (await blocked(day, longitude + off)) {
        found.push(day);
        break;
      }
  // Within two days of where it was put, for most of its days, and never far from them.
  const within = found.filter((day) => day >= first && day <= last);
  expect(within.length).toBeGreaterThanOrEqual((last - first + 1) / 2);
  expect(Math.min(...found)).toBeGreaterThanOrEqual(first - 2);
  expect(Math.max(...found)).toBeLessThanOrEqual(last + 2);
});
