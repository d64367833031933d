import { readFileSync } from "node:fs";
import { describe, expect, test } from "vitest";
import { LIBRARIES } from "../../../../app/codecs/libraries.ts";
import type { Correction } from "../../../../core/formats/dataset.ts";
import { memorySource } from "../../../../core/formats/memory-source.ts";
import type { WrittenFile, WrittenVariable } from "../../../../core/formats/netcdf/write.ts";
import { openFile } from "../../../../core/formats/open-file.ts";
import { smallFile, writtenSource } from "../written.ts";

// Written by reference/make_packed.py: netCDF4-python masked and unpacked them.
const PACKED = JSON.parse(readFileSync(new URL("reference/packed.json", import.meta.url), "utf8")) as Record<
  string,
  (number | null)[]
>;

async function opened(file: WrittenFile, corrections: readonly Correction[] = []) {
  return openFile(writtenSource(file), LIBRARIES, corrections);
}
async function fieldOf(changes: Record<string, Partial<WrittenVariable>>, corrections: readonly Correction[] = []) {
  const file = await opened(smallFile(changes), corrections);
  return { file, field: file.contents.fields[0], left: file.contents.leftOut[0] };
}

test.each(Object.keys(PACKED))("%s: packed and masked numbers are netCDF4-python's", async (name) => {
  const container = name.slice(0, name.indexOf("/"));
  const bytes = Uint8Array.from(readFileSync(new URL(`reference/${container}`, import.meta.url)));
  const file = await openFile(memorySource(container, bytes), LIBRARIES);
  const { data } = await file.read(name, { times: [0, 1] });
  // Both multiply and add in float64, once each.
  expect([...data].map((value) => (Number.isNaN(value) ? null : value))).toEqual(PACKED[name]);
});

/** Longitudes of the columns of the small file's first row, by the number that each holds: column i of the file holds i. */
async function columns(lon: readonly number[]) {
  const base = smallFile();
  const data = Float32Array.from({ length: 2 * 2 * 3 * lon.length }, (_, i) => i % lon.length);
  const variables = base.variables.map((variable) =>
    variable.name === "lon"
      ? { ...variable, data: Float64Array.from(lon) }
      : variable.name === "z"
        ? { ...variable, data }
        : variable,
  );
  const file = await opened({ ...base, dimensions: { ...base.dimensions, lon: lon.length }, variables });
  const { fields, leftOut, notes } = file.contents;
  const [field] = fields;
  if (field === undefined) return { why: leftOut[0]?.why };
  const slab = await file.read(field.key, { times: [0, 1], levels: [0], rows: [0, 1] });
  return { lon: [...field.grid.lon], held: [...slab.data], closes: field.grid.closesCircle, notes };
}

describe("columns", () => {
  test.each([
    [
      [0, 90, 180, 270],
      [0, 90, 180, 270],
      [0, 1, 2, 3],
    ],
    [
      [-180, -90, 0, 90],
      [-180, -90, 0, 90],
      [0, 1, 2, 3],
    ],
    [
      [180, 270, 360, 450],
      [180, 270, 360, 450],
      [0, 1, 2, 3],
    ],
    // From the east
    [
      [270, 180, 90, 0],
      [0, 90, 180, 270],
      [3, 2, 1, 0],
    ],
    // The jump at the date line, either way
    [
      [90, 180, -90, 0],
      [90, 180, 270, 360],
      [0, 1, 2, 3],
    ],
    [
      [0, -90, 180, 90],
      [90, 180, 270, 360],
      [3, 2, 1, 0],
    ],
    // A whole turn off
    [
      [-360, -270, -180, -90],
      [0, 90, 180, 270],
      [0, 1, 2, 3],
    ],
    [
      [720, 810, 900, 990],
      [0, 90, 180, 270],
      [0, 1, 2, 3],
    ],
    // The first meridian twice
    [
      [0, 90, 180, 270, 360],
      [0, 90, 180, 270],
      [0, 1, 2, 3],
    ],
  ])("%j", async (lon, want, held) => {
    expect(await columns(lon)).toMatchObject({ lon: want, held, closes: true });
  });

  test("the repeated meridian is told, a region does not close, and disorder is refused", async () => {
    expect((await columns([0, 90, 180, 270, 360])).notes?.join()).toContain(
      "the last column repeats the first meridian",
    );
    expect(await columns([10, 20, 30, 40])).toMatchObject({ closes: false });
    expect((await columns([0, 20, 10, 30])).why).toContain("longitudes do not run one way at column 2");
    expect((await columns([0, 20, 20, 10])).why).toContain("longitudes do not run one way");
    expect((await columns([0, 120, 240, 380])).why).toContain("more than one circle");
  });
});

describe("rows and levels", () => {
  test("north first is turned round; numbers come out south first", async () => {
    const { file, field } = await fieldOf({ lat: { data: Float32Array.of(45, 0, -45) } });
    expect([...(field?.grid.lat ?? [])]).toEqual([-45, 0, 45]);
    const slab = await file.read(field?.key ?? "", { times: [1, 2], levels: [1], rows: [0, 2] });
    // Time 1, level 1 begins at 36; its last row in the file is the southernmost.
    expect([...slab.data]).toEqual([44, 45, 46, 47, 40, 41, 42, 43]);
  });

  test.each([
    [{ units: "Pa" }, [25_000, 50_000], [250, 500]],
    [{ units: "millibars" }, [500, 250], [500, 250]],
    [{ units: "kPa", positive: "down" }, [50, 25], [500, 250]],
  ])("levels %j", async (attributes, stored, hPa) => {
    const { field } = await fieldOf({ lev: { attributes, data: Float32Array.from(stored) } });
    expect([...(field?.levels ?? [])]).toEqual(hPa);
  });

  test("levels in the order asked, across the file's", async () => {
    const { file, field } = await fieldOf({});
    const slab = await file.read(field?.key ?? "", { times: [0, 1], levels: [1, 0], rows: [0, 1] });
    expect([...slab.data]).toEqual([12, 13, 14, 15, 0, 1, 2, 3]);
    for (const request of [
      { times: [0, 3] },
      { times: [1, 1] },
      { times: [0, 1], levels: [2] },
      { times: [0, 1], levels: [] },
      { times: [0, 1], rows: [0, 4] },
    ])
      await expect(file.read(field?.key ?? "", request as never)).rejects.toMatchObject({ name: "ShapeError" });
    await expect(file.read("made.nc/x", { times: [0, 1] })).rejects.toThrow("There is no field made.nc/x");
  });
});

describe("what a variable is", () => {
  test.each([
    [{ standard_name: "geopotential", units: "m2 s-2" }, "z", "geopotential_height", "gpm"],
    [{ units: "m" }, "hgt", "geopotential_height", "gpm"],
    [{ units: "m s**-1" }, "u850", "eastward_wind", "m s-1"],
    [{ standard_name: "northward_wind", units: "kt" }, "whatever", "northward_wind", "m s-1"],
    [{ units: "degC" }, "ta", "air_temperature", "K"],
    [{ units: "kg kg-1" }, "q", null, "kg kg-1"],
  ])("%j named %s", async (attributes, name, quantity, units) => {
    const { field } = await fieldOf({ z: { name, attributes } });
    expect(field).toMatchObject({ quantity, units });
  });

  test("unknown units are refused in words, and the user can say them", async () => {
    const { left } = await fieldOf({ z: { attributes: { standard_name: "geopotential_height", units: "fathoms" } } });
    expect(left?.why).toContain('units "fathoms" are not known. Known are: m, dam, km, m2 s-2');
    const said = { file: "made.nc", variable: "z", units: "dam" };
    const { field, file } = await fieldOf(
      { z: { attributes: { standard_name: "geopotential_height", units: "fathoms" } } },
      [said],
    );
    expect((await file.read(field?.key ?? "", { times: [0, 1], levels: [0] })).data[3]).toBe(30);
    const { field: taken } = await fieldOf({ z: { name: "q", attributes: { units: "m" } } }, [
      { file: "made.nc", variable: "q", quantity: "geopotential_height" },
    ]);
    expect(taken).toMatchObject({ quantity: "geopotential_height", why: expect.stringContaining("you said") });
  });
});

describe("steps", () => {
  test("a record that is no time steps by its numbers", async () => {
    const { field } = await fieldOf({ time: { attributes: { long_name: "month" }, data: Float64Array.of(1, 7) } });
    expect(field?.steps).toMatchObject({ kind: "record", name: "time" });
    expect([...(field?.steps.values ?? [])]).toEqual([1, 7]);
  });

  test.each([
    [
      { units: "days since 2001-01-01", calendar: "lunar" },
      [0, 1],
      'the calendar "lunar" is not one of the CF conventions',
    ],
    [{ units: "months since 2001-01-01" }, [0, 1], "has no fixed length here"],
    [{ units: "days since 2001-01-01" }, [1, 1], "times do not increase at step 2 of 2"],
    [{ units: "days since 2001-01-01" }, [0, Number.NaN], "time 2 of 2 is missing"],
    [{ units: "days since 2001-01-01" }, [0, 1e12], "beyond any calendar"],
  ])("%j of %j is left out, with the reason", async (attributes, stored, words) => {
    const { left } = await fieldOf({ time: { attributes, data: Float64Array.from(stored) } });
    expect(left?.why).toContain(words);
  });
});

describe("what is left out, and why", () => {
  const odd = (dims: string[], size: number, more: WrittenVariable[] = [], attributes = {}) => {
    const base = smallFile();
    const z = { name: "odd", dims, attributes: { units: "gpm", ...attributes }, data: new Float32Array(size) };
    return opened({
      ...base,
      dimensions: { ...base.dimensions, a: 2, b: 2 },
      variables: [...base.variables, ...more, z],
    });
  };
  const why = async (file: Awaited<ReturnType<typeof opened>>) =>
    file.contents.leftOut.find(({ variable }) => variable === "odd")?.why;

  test("no latitude, no values, further dimensions, curvilinear grids, heights above ground", async () => {
    expect(await why(await odd(["time", "lon"], 8))).toContain("it has no latitude axis");
    expect(await why(await odd(["lat", "lat", "lon"], 36))).toContain("it has a further dimension, lat of 3");
    expect(await why(await odd(["a", "b", "lat", "lon"], 48))).toContain("it has a further dimension, a of 2, b of 2");
    const two = (name: string, units: string) => ({
      name,
      dims: ["a", "b"],
      attributes: { units },
      data: new Float32Array(4),
    });
    const curved = await odd(["a", "b"], 4, [two("la", "degrees_north"), two("lo", "degrees_east")], {
      coordinates: "la lo",
    });
    expect(await why(curved)).toContain("its grid is curvilinear");
    const heights = {
      name: "a",
      dims: ["a"],
      attributes: { units: "m", positive: "up" },
      data: Float32Array.of(10, 100),
    };
    expect(await why(await odd(["a", "lat", "lon"], 24, [heights]))).toContain('are in "m", not in a pressure');
    const bad = { name: "a", dims: ["a"], attributes: { units: "hPa" }, data: Float32Array.of(500, -1) };
    expect(await why(await odd(["a", "lat", "lon"], 24, [bad]))).toContain("level 2 of its 2 (a) is -1, no pressure");
  });

  test("rows that are no latitudes", async () => {
    expect((await fieldOf({ lat: { data: Float32Array.of(0, 50, 100) } })).left?.why).toContain(
      "is at latitude 100, which is none",
    );
    expect((await fieldOf({ lat: { data: Float32Array.of(0, 50, 40) } })).left?.why).toContain(
      "latitudes do not run one way",
    );
  });
});

test.each([
  ["z500", {}, 500],
  ["z", { long_name: "height at 250 hPa" }, 250],
  ["z", { level: 300 }, 300],
  ["u10", { units: "m s-1" }, null],
  ["v100", { units: "m s-1", long_name: "wind at 100 m" }, null],
  ["z", {}, null],
])("a field without level axis: %s %j stands at %s hPa", async (name, attributes, hPa) => {
  const base = smallFile();
  const variables = base.variables.filter((variable) => variable.name !== "z" && variable.name !== "lev");
  const z = {
    name,
    dims: ["time", "lat", "lon"],
    attributes: { units: "gpm", ...attributes },
    data: new Float32Array(24),
  };
  const file = await opened({ ...base, variables: [...variables, z] });
  expect(file.contents.fields[0]?.levels ?? null).toEqual(hPa === null ? null : Float64Array.of(hPa));
});
