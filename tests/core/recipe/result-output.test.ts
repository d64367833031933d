import { spawnSync } from "node:child_process";
import { mkdtempSync, rmSync, writeFileSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { describe, expect, test } from "vitest";
import { memorySource } from "../../../core/formats/memory-source.ts";
import { openNetcdfClassic } from "../../../core/formats/netcdf/classic-store.ts";
import type { Result } from "../../../core/recipe/recipe.ts";
import { resultBytes, resultLayout } from "../../../core/recipe/result-file.ts";
import { resultTable, tableText } from "../../../core/recipe/result-table.ts";

function result(change: Partial<Result> = {}): Result {
  return {
    id: "waves",
    diagnostic: "zonal-waves",
    title: "Zonal waves",
    options: { band: [50, 60], waves: [1, 2], of: "field", deep: true, point: null },
    provenance: {
      program: "Isohypse 0.1.0",
      made: "2001-02-03T04:05:06.000Z",
      recipe: { id: "waves", diagnostic: "zonal-waves", field: "geopotential_height" },
      background: { kind: "record-mean" },
      inputs: [{ file: "a.nc", bytes: 12, variable: "z", quantity: "geopotential_height", why: "standard_name" }],
    },
    coordinates: [
      {
        name: "time",
        values: Float64Array.of(11_000, 11_000.25, 11_000.5),
        units: "days since 1970-01-01 00:00:00",
        attributes: { calendar: "standard" },
      },
      { name: "band", values: Float64Array.of(55), units: "degrees_north", attributes: { standard_name: "latitude" } },
      { name: "wavenumber", values: Float64Array.of(1, 2), units: "1" },
    ],
    variables: [
      {
        name: "amplitude",
        title: "Amplitude",
        units: "gpm",
        dims: ["time", "band", "wavenumber"],
        shape: [3, 1, 2],
        data: Float64Array.of(0.1, 1 / 3, Number.NaN, 4e-300, 5, 6),
        reasons: Uint8Array.of(0, 0, 7, 0, 6, 0),
      },
      {
        name: "mean",
        title: "Mean, of all",
        units: "gpm2",
        dims: ["wavenumber"],
        shape: [2],
        data: Float32Array.of(0.1, Number.NaN),
      },
    ],
    notes: ["First note.", "Second note."],
    ...change,
  };
}

function bytesOf(made: Result): Uint8Array {
  // A plain array: a Buffer's slice would share its memory.
  return new Uint8Array(Buffer.concat([...resultBytes(made)]));
}

describe("result file", () => {
  test("reads back to the same numbers, with reasons beside them", async () => {
    const store = await openNetcdfClassic(memorySource("waves.nc", bytesOf(result())));
    const all = async (name: string) => {
      const variable = store.variables.find((candidate) => candidate.name === name);
      if (variable === undefined) throw new Error(`no ${name}`);
      const zero = variable.shape.map(() => 0);
      return [...(await store.readNumbers(name, zero, variable.shape))];
    };
    expect(await all("amplitude")).toEqual([...result().variables[0].data]);
    expect(await all("amplitude_reason")).toEqual([0, 0, 7, 0, 6, 0]);
    expect(await all("mean")).toEqual([Math.fround(0.1), Number.NaN]);
    // No reason was given for a NaN: it is missing data.
    expect(await all("mean_reason")).toEqual([0, 1]);
    expect(await all("time")).toEqual([11_000, 11_000.25, 11_000.5]);
    expect(await all("band_bounds")).toEqual([50, 60]);
    const attributes = (name: string) => store.variables.find((variable) => variable.name === name)?.attributes;
    expect(attributes("amplitude")).toMatchObject({
      long_name: "Amplitude",
      units: "m",
      ancillary_variables: "amplitude_reason",
    });
    expect(attributes("mean")).toMatchObject({ standard_name: "geopotential_height", units: "m2" });
    expect(attributes("time")).toMatchObject({ standard_name: "time", calendar: "standard", axis: "T" });
    expect(attributes("band")).toMatchObject({ bounds: "band_bounds", standard_name: "latitude" });
    const flags = attributes("amplitude_reason");
    expect(flags?.flag_values).toEqual([0, 1, 2, 3, 4, 5, 6, 7, 8, 9]);
    expect(String(flags?.flag_meanings).split(" ")).toHaveLength(10);
    expect(store.attributes).toMatchObject({
      Conventions: "CF-1.11",
      title: "Zonal waves (waves)",
      source: "Isohypse 0.1.0, zonal-waves, from a.nc/z",
      history: "2001-02-03T04:05:06.000Z Isohypse 0.1.0: zonal-waves of a.nc/z",
      background: '{"kind":"record-mean"}',
      option_band: [50, 60],
      option_of: "field",
      option_deep: "true",
      option_point: "none",
      comment: "First note. Second note.",
    });
    expect(store.attributes.references).toContain("Smith & Kushner 2012");
  });

  test("a record that is not a time keeps its own name, on the dimension that all results step along", async () => {
    const [, ...rest] = result().coordinates;
    const month = { name: "time", values: Float64Array.of(1, 2, 3), units: "1", attributes: { long_name: "month" } };
    const made = result({ coordinates: [month, ...rest] });
    const layout = resultLayout(made);
    expect(layout.dimensions.time).toBe(3);
    expect(layout.variables.find(({ name }) => name === "month")?.dims).toEqual(["time"]);
    expect(layout.variables.some(({ name }) => name === "time")).toBe(false);
    expect(layout.variables.find(({ name }) => name === "amplitude")?.attributes.coordinates).toBe("month");
    expect(layout.variables.find(({ name }) => name === "mean")?.attributes.coordinates).toBeUndefined();
    const { table } = resultTable(made);
    if (table === null) throw new Error("no table");
    expect([...tableText(table)].join("")).toMatch(/^month,band \(degrees_north\),wavenumber,/);
  });

  test("a coordinate that no dimension has is a scalar, and its variables name it", () => {
    const level = { name: "level", values: Float64Array.of(500), units: "hPa" };
    const layout = resultLayout(result({ coordinates: [...result().coordinates, level] }));
    expect(layout.variables.find(({ name }) => name === "level")).toMatchObject({
      dims: [],
      attributes: { standard_name: "air_pressure", positive: "down", units: "hPa" },
    });
    expect(layout.variables.find(({ name }) => name === "amplitude")?.attributes.coordinates).toBe("level");
  });

  test("shapes that contradict each other are refused", () => {
    const [amplitude] = result().variables;
    const other = { ...amplitude, name: "other", shape: [2, 1, 3] };
    expect(() => resultLayout(result({ variables: [amplitude, other] }))).toThrow(
      "other: time has 2 values here and 3 elsewhere",
    );
    const short = { name: "time", values: Float64Array.of(1), units: "1" };
    expect(() => resultLayout(result({ coordinates: [short] }))).toThrow("time has 1 values for 3 cells");
    const stray = { name: "member", values: Float64Array.of(1, 2), units: "1" };
    expect(() => resultLayout(result({ coordinates: [stray] }))).toThrow("no variable has the dimension member");
  });

  test("ncdump (Unidata's reference library) reads it", (context) => {
    const folder = mkdtempSync(join(tmpdir(), "isohypse-ncdump-"));
    try {
      const path = join(folder, "waves.nc");
      writeFileSync(path, bytesOf(result()));
      const run = spawnSync("ncdump", [path], { encoding: "utf8" });
      if (run.error !== undefined) return context.skip("ncdump is not installed");
      expect(run.status, run.stderr).toBe(0);
      expect(run.stdout).toContain("double amplitude(time, band, wavenumber) ;");
      expect(run.stdout).toContain("float mean(wavenumber) ;");
      expect(run.stdout.replaceAll(/\s+/g, " ")).toContain("amplitude_reason = 0, 0, 7, 0, 6, 0 ;");
      expect(run.stdout).toContain(':Conventions = "CF-1.11" ;');
    } finally {
      rmSync(folder, { recursive: true, force: true });
    }
  });
});

describe("result table", () => {
  test("a header with units, dates in UTC, numbers that read back exactly, blanks with their reason", () => {
    const { table, note } = resultTable(result());
    if (table === null) throw new Error("no table");
    expect(note).toBeNull();
    // 11 000 days after 1970-01-01 is 2000-02-13 (date -u -d @950400000).
    expect([...tableText(table)].join("").split("\n")).toEqual([
      "time (UTC),band (degrees_north),wavenumber,amplitude (gpm),amplitude_reason,mean (gpm2),mean_reason",
      "2000-02-13T00:00:00Z,55,1,0.1,,0.10000000149011612,",
      "2000-02-13T00:00:00Z,55,2,0.3333333333333333,,,missing data",
      "2000-02-13T06:00:00Z,55,1,,amplitude too small,0.10000000149011612,",
      "2000-02-13T06:00:00Z,55,2,4e-300,,,missing data",
      "2000-02-13T12:00:00Z,55,1,5,ambiguous,0.10000000149011612,",
      "2000-02-13T12:00:00Z,55,2,6,,,missing data",
      "",
    ]);
  });

  test("too long a table gives way to that of the record as a whole, and says so", () => {
    const { table, note } = resultTable(result(), 5);
    expect(table?.dims).toEqual(["wavenumber"]);
    expect(note).toBe("The CSV leaves out amplitude (over 5 rows); the netCDF file has them.");
    expect(resultTable(result(), 1)).toEqual({
      table: null,
      note: "No CSV: every table of this result is over 1 rows; the netCDF file has it all.",
    });
  });

  test("variables of another shape stay in the netCDF file", () => {
    const longitude = { name: "longitude", values: Float64Array.of(0, 120, 240), units: "degrees_east" };
    const [amplitude] = result().variables;
    const field = {
      ...amplitude,
      name: "field",
      dims: ["time", "longitude"],
      shape: [3, 3],
      data: new Float64Array(9),
    };
    const { reasons, ...plain } = field;
    expect(reasons).toBeDefined();
    const { table, note } = resultTable(
      result({ coordinates: [...result().coordinates, longitude], variables: [amplitude, plain] }),
    );
    expect(table?.variables).toEqual([amplitude]);
    expect(note).toBe("The CSV leaves out field (another shape); the netCDF file has them.");
  });
});
