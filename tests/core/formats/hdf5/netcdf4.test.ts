import { existsSync, readFileSync } from "node:fs";
import { describe, expect, test } from "vitest";
import { LIBRARIES } from "../../../../app/codecs/libraries.ts";
import type { OpenFile } from "../../../../core/formats/dataset.ts";
import { looksLikeHdf5, openNetcdf4 } from "../../../../core/formats/hdf5/netcdf4-store.ts";
import { memorySource } from "../../../../core/formats/memory-source.ts";
import { openFile } from "../../../../core/formats/open-file.ts";
import type { VariableStore } from "../../../../core/formats/variable-store.ts";
import { dataFile } from "../data-folder.ts";
import { referenceBytes } from "../written.ts";

interface Held {
  readonly shape: number[];
  readonly values: (number | null)[];
  readonly attributes: Readonly<Record<string, number[] | string>>;
}
// Written by reference/make_files.py: netCDF4-python made the files and read them.
const HELD: Readonly<Record<string, Readonly<Record<string, Held>>>> = JSON.parse(
  readFileSync(new URL("reference/values.json", import.meta.url), "utf8"),
);

function bytesOf(name: string): Uint8Array {
  return Uint8Array.from(readFileSync(new URL(`reference/${name}`, import.meta.url)));
}
async function opened(name: string, bytes = bytesOf(name)): Promise<VariableStore> {
  return openNetcdf4(memorySource(name, bytes), await LIBRARIES.hdf5());
}
async function whole(store: VariableStore, name: string): Promise<Float64Array> {
  const variable = store.variables.find((one) => one.name === name);
  if (variable === undefined) throw new Error(`no ${name}`);
  return store.readNumbers(
    name,
    variable.shape.map(() => 0),
    variable.shape,
  );
}

test.each(Object.keys(HELD))("%s reads as netCDF4-python reads it", async (name) => {
  const store = await opened(name);
  expect(store.format).toBe("netCDF-4 (HDF5)");
  const held = HELD[name] as Readonly<Record<string, Held>>;
  const numeric = store.variables.filter(({ type }) => type !== "char");
  expect(numeric.map((variable) => variable.name).sort()).toEqual(Object.keys(held).sort());
  for (const variable of numeric) {
    const want = held[variable.name] as Held;
    expect(variable.shape, variable.name).toEqual(want.shape);
    const got = [...(await whole(store, variable.name))];
    // What was never written is the library's fill value there, and missing here.
    const values =
      variable.name === "short" ? want.values.map((v) => ((v as number) > 1e36 ? Number.NaN : v)) : want.values;
    expect(got, variable.name).toEqual(values); // exact: each stored number is a float64
    for (const [key, value] of Object.entries(want.attributes)) {
      const found = variable.attributes[key];
      if (key !== "_FillValue")
        expect(typeof found === "number" ? [found] : found, `${variable.name}:${key}`).toEqual(value);
    }
    expect(
      Object.keys(variable.attributes).filter((key) => /^(_Netcdf4|CLASS|NAME|DIMENSION|REFERENCE)/.test(key)),
    ).toEqual([]);
  }
  await store.close();
});

test("text is text, and dimensions are found through their scales", async () => {
  const types = await opened("types.nc");
  expect(types.attributes).toMatchObject({ title: "every type", numbers: [1, 2, 3] });
  expect(
    types.variables
      .filter(({ type }) => type === "char")
      .map(({ name }) => name)
      .sort(),
  ).toEqual(["letters_of", "words"]);
  await expect(types.readNumbers("words", [0], [1])).rejects.toThrow("types.nc holds no variable words of numbers");
  const packed = await opened("packed.nc");
  expect(packed.variables.find(({ name }) => name === "deflate")?.dims).toEqual(["t", "y", "x"]);
  expect(packed.dimensions).toContainEqual({ name: "t", length: 4, isRecord: true });
  const groups = await opened("groups.nc");
  const dims = Object.fromEntries(groups.variables.map(({ name, dims: own }) => [name, own]));
  expect(dims).toEqual({
    lat: ["lat"],
    n: ["lat", "n"],
    "inner/lon": ["inner/lon"],
    "inner/z": ["lat", "inner/lon"],
    "inner/deeper/w": ["bare"],
  });
});

test("every slab of a packed variable is that part of the whole, whatever its chunks", async () => {
  const store = await opened("packed.nc");
  const all = await whole(store, "plain");
  for (const name of ["deflate", "shuffle", "checked", "turned", "plain"])
    for (let t = 0; t < 4; t++)
      for (let y = 0; y < 5; y++)
        for (const [nt, ny, x, nx] of [
          [1, 1, 0, 6],
          [Math.min(2, 4 - t), Math.min(3, 5 - y), 2, 3],
          [4 - t, 5 - y, 5, 1],
        ] as const) {
          const want: number[] = [];
          for (let i = t; i < t + nt; i++)
            for (let j = y; j < y + ny; j++)
              for (let k = x; k < x + nx; k++) want.push(all[(i * 5 + j) * 6 + k] as number);
          expect([...(await store.readNumbers(name, [t, y, x], [nt, ny, nx]))], `${name} ${t} ${y}`).toEqual(want);
        }
  expect((await store.readNumbers("short", [1, 4, 4], [3, 1, 2])).slice(0, 3)).toEqual(
    Float64Array.of(58, 59, Number.NaN),
  );
  for (const [start, count] of [
    [
      [0, 0],
      [1, 1],
    ],
    [
      [0, 0, 0],
      [5, 1, 1],
    ],
    [
      [-1, 0, 0],
      [1, 1, 1],
    ],
  ])
    await expect(store.readNumbers("plain", start as number[], count as number[])).rejects.toMatchObject({
      name: "ShapeError",
    });
});

test("plain HDF5: dimensions by length, and what is no field is left out in words", async () => {
  const store = await opened("plain.h5");
  expect(store.variables.map(({ name, dims }) => [name, dims])).toEqual([
    ["height", ["lat", "height_2"]],
    ["lat", ["lat"]],
  ]);
  expect(store.notes.join(" ")).toContain("pair is compound, which is no field, and is left out");
  expect(store.notes.join(" ")).toContain("choice is an enumeration");
  expect(store.notes.join(" ")).toContain("ragged is of variable length");
  expect(store.notes.join(" ")).toContain("half is of 2 bytes");
});

test("szip is unpacked", async () => {
  const store = await opened("szip.h5");
  // The very numbers that reference/make_files.py put in
  expect([...(await whole(store, "packed"))]).toEqual(Array.from({ length: 48 }, (_, i) => i * 0.5));
});

test("a filter that is not read is named before anything is read", async () => {
  const store = await opened("filtered.h5");
  await expect(store.readNumbers("scaled", [0], [4])).rejects.toThrow(
    "filtered.h5, scaled: it is packed with scaleoffset (HDF5 filter 32099), which is not read. Repack it with deflate",
  );
});

test("a damaged chunk is told, not read as garbage; other files are still read", async () => {
  const bytes = bytesOf("packed.nc");
  const good = await opened("packed.nc");
  // The deflated chunks begin with zlib's header, 0x78; spoil what follows one of them.
  let spoiled = 0;
  for (let i = bytes.length - 200; i > 0 && spoiled < 40; i--)
    if (bytes[i] === 0x78 && [0x01, 0x5e, 0x9c].includes(bytes[i + 1] as number)) {
      bytes.fill(0xff, i + 3, i + 9);
      spoiled += 1;
    }
  expect(spoiled).toBeGreaterThan(3);
  const bad = await opened("spoiled.nc", bytes);
  await expect(whole(bad, "deflate")).rejects.toMatchObject({ name: "FormatError" });
  await expect(whole(bad, "deflate")).rejects.toThrow(/^spoiled\.nc: \/deflate cannot be read as HDF5 \(/);
  expect((await whole(good, "shuffle"))[7]).toBe(7);
});

describe("the same field in every container", () => {
  const classics = ["field_1.nc", "field_2.nc", "field_5.nc"].map((name) => [name, referenceBytes(name)] as const);
  const fours = ["field_nc4.nc", "field_nc4_deflate.nc", "field_nc4_classic.nc"].map(
    (name) => [name, bytesOf(name)] as const,
  );

  test("bit for bit", async () => {
    const files: OpenFile[] = [];
    for (const [name, bytes] of [...classics, ...fours])
      files.push(await openFile(memorySource(name, bytes), LIBRARIES));
    const [first, ...others] = files as [OpenFile, ...OpenFile[]];
    for (const other of others)
      for (const field of first.contents.fields) {
        const twin = other.contents.fields.find(({ variable }) => variable === field.variable);
        expect({ ...twin, key: "", file: "" }).toEqual({ ...field, key: "", file: "" });
        const n = field.steps.values.length;
        const [a, b] = [
          await first.read(field.key, { times: [0, n] }),
          await other.read(twin?.key ?? "", { times: [0, n] }),
        ];
        expect(b.shape).toEqual(a.shape);
        expect(Buffer.from(b.data.buffer).equals(Buffer.from(a.data.buffer))).toBe(true);
      }
  });
});

const REAL = [dataFile("sresa1b_ncar_ccsm3-example.nc"), dataFile("sresa1b_ncar_ccsm3-example.4.nc")];
test.skipIf(!REAL.every((path) => existsSync(path)))(
  "a climate model's file as CDF-1 and netCDF-4: ua is identical",
  async () => {
    const [one, four] = (await Promise.all(
      REAL.map((path, i) => openFile(memorySource(`${i}.nc`, Uint8Array.from(readFileSync(path))), LIBRARIES)),
    )) as [OpenFile, OpenFile];
    const [a, b] = [await one.read("0.nc/ua", { times: [0, 1] }), await four.read("1.nc/ua", { times: [0, 1] })];
    expect(a.shape).toEqual([1, 17, 128, 256]);
    expect(Buffer.from(b.data.buffer).equals(Buffer.from(a.data.buffer))).toBe(true);
  },
);

test("the first bytes say what it is", () => {
  expect(looksLikeHdf5(bytesOf("types.nc"))).toBe(true);
  expect(looksLikeHdf5(referenceBytes("types_1.nc"))).toBe(false);
});
