import { existsSync, mkdtempSync, readFileSync, rmSync, writeFileSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { afterAll, beforeAll, describe, expect, test } from "vitest";
import { run } from "../../../app/batch/command.ts";
import { LIBRARIES } from "../../../app/codecs/libraries.ts";
import { isoText } from "../../../core/field/calendar.ts";
import { memorySource } from "../../../core/formats/memory-source.ts";
import { openFile } from "../../../core/formats/open-file.ts";
import { dataFile } from "../../core/formats/data-folder.ts";
import { listeningIo } from "./built-batch.ts";

interface Waves {
  readonly member?: number;
  readonly time: string;
  readonly latitude: number;
  /** Amplitude and ridge of each wave from 1 on. */
  readonly waves: readonly (readonly [number, number])[];
}
// Written by reference/grib_waves.py: ecCodes decoded the files, numpy.fft made the waves.
const REFERENCE: Readonly<Record<"forecast" | "ensemble", readonly Waves[]>> = JSON.parse(
  readFileSync(new URL("reference/grib_waves.json", import.meta.url), "utf8"),
);
const FORECAST = dataFile("gfs_2p5_20110110T12_f120.grib2");
const ENSEMBLE = dataFile("era5_eda_z_t_3deg_10memb.grib");

let folder = "";
beforeAll(() => {
  folder = mkdtempSync(join(tmpdir(), "isohypse-grib-"));
});
afterAll(() => rmSync(folder, { recursive: true, force: true }));

/** Rows of the CSV that batch writes for a recipe of one result, by column name. */
async function table(result: Record<string, unknown>, file: string): Promise<Record<string, string>[]> {
  const recipe = join(folder, "recipe.json");
  const whole = {
    id: "w",
    diagnostic: "zonal-waves",
    field: "geopotential_height",
    level: 500,
    waves: [1, 6],
    ...result,
  };
  writeFileSync(recipe, JSON.stringify({ isohypse: 1, results: [whole] }));
  const said = listeningIo(new URL("file:///nowhere"));
  expect([await run([recipe, file, "--out", folder, "--workers", "1"], said.io), said.stderr]).toEqual([0, ""]);
  const [head = "", ...lines] = readFileSync(join(folder, "w.csv"), "utf8").trim().split("\n");
  const names = head.split(",").map((name) => name.replace(/ \(.*\)$/, ""));
  return lines.map((line) => Object.fromEntries(line.split(",").map((cell, i) => [names[i], cell])));
}

function expectWaves(rows: readonly Record<string, string>[], want: Waves, columns: number): void {
  const time = want.time.replace(/^(\d{4})(\d\d)(\d\d)T(\d\d)(\d\d)$/, "$1-$2-$3T$4:$5:00Z");
  // Both work in float64 on `columns` numbers up to 6000 gpm: a transform is off by at most log2(n) · 2⁻⁵³ · 6000 · a few.
  const limit = 6000 * Math.log2(columns) * 4 * 2 ** -53;
  want.waves.forEach(([amplitude, ridge], i) => {
    const row = rows.find(
      (one) =>
        one.time === time &&
        Number(one.latitude ?? one.band) === want.latitude &&
        Number(one.wavenumber) === i + 1 &&
        (want.member === undefined || Number(one.member) === want.member),
    );
    expect(Math.abs(Number(row?.amplitude) - amplitude), JSON.stringify(want)).toBeLessThanOrEqual(limit);
    const off = Math.abs(Number(row?.ridge_longitude) - ridge);
    expect(off, JSON.stringify(want)).toBeLessThanOrEqual(((limit / amplitude) * 180) / Math.PI + 360 * 2 ** -50);
  });
}

describe.skipIf(!existsSync(FORECAST))("a forecast in GRIB 2: complex packing with spatial differences", () => {
  test("its waves are those that ecCodes and numpy find", async () => {
    const rows = await table({}, FORECAST);
    for (const want of REFERENCE.forecast) expectWaves(rows, want, 144);
  });

  test("start and valid time are told apart", async () => {
    const { contents } = await openFile(memorySource("f.grib2", Uint8Array.from(readFileSync(FORECAST))), LIBRARIES);
    const field = contents.fields.find(({ quantity }) => quantity === "geopotential_height");
    expect(isoText(field?.reference ?? Number.NaN, "standard")).toBe("2011-01-10T12:00:00Z");
    expect([...(field?.steps.values ?? [])].map((days) => isoText(days, "standard"))).toEqual(["2011-01-15T12:00:00Z"]);
  });
});

describe.skipIf(!existsSync(ENSEMBLE))("an ensemble of ten in GRIB 1", () => {
  test("every member and time has the waves that ecCodes and numpy find", async () => {
    const rows = await table({}, ENSEMBLE);
    expect(new Set(REFERENCE.ensemble.map(({ member }) => member)).size).toBe(10);
    for (const want of REFERENCE.ensemble) expectWaves(rows, want, 120);
  });

  test("members and levels can be chosen", async () => {
    const rows = await table({ member: [7, 3], level: [500, 850] }, ENSEMBLE);
    expect([...new Set(rows.map(({ member }) => member))]).toEqual(["7", "3"]);
    expect([...new Set(rows.map(({ level }) => level))]).toEqual(["500", "850"]);
    const at500 = rows.filter(({ level }) => level === "500");
    for (const want of REFERENCE.ensemble.filter(({ member }) => member === 3 || member === 7))
      expectWaves(at500, want, 120);
  });
});
