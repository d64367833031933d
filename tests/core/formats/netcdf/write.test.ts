import { spawnSync } from "node:child_process";
import { mkdtempSync, rmSync, truncateSync, writeFileSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import fc from "fast-check";
import { afterAll, beforeAll, describe, expect, test } from "vitest";
import { memorySource } from "../../../../core/formats/memory-source.ts";
import { openNetcdfClassic } from "../../../../core/formats/netcdf/classic-store.ts";
import { classicHeader } from "../../../../core/formats/netcdf/header.ts";
import { classicFile, type WrittenFile, type WrittenNumbers } from "../../../../core/formats/netcdf/write.ts";
import { bytesOf, smallFile } from "../written.ts";

const HAS_NCDUMP = spawnSync("ncdump").error === undefined;
if (!HAS_NCDUMP)
  console.warn("skipped: ncdump is not installed, so files are read back by the project's own reader alone");

let folder = "";
beforeAll(() => {
  folder = mkdtempSync(join(tmpdir(), "written-"));
});
afterAll(() => rmSync(folder, { recursive: true }));

/** What the netCDF library's own ncdump makes of a file, on one line. `-p 9,17`: enough digits for every number. */
function dumped(bytes: Uint8Array, name: string, size = bytes.length, options = ["-p", "9,17"]): string {
  const path = join(folder, name);
  writeFileSync(path, bytes);
  if (size > bytes.length) truncateSync(path, size);
  const run = spawnSync("ncdump", [...options, path], { encoding: "utf8" });
  expect(run.stderr).toBe("");
  expect(run.status).toBe(0);
  return run.stdout.replace(/\s+/g, " ");
}

/** Every type, with its extremes and sizes that need padding. */
const ALL_TYPES: WrittenFile = {
  dimensions: { one: 1, x: 3, y: 2 },
  attributes: {
    title: "Höhe, 500 hPa",
    nothing: "",
    double: 0.1,
    doubles: Float64Array.of(1.5, -2),
    float: Float32Array.of(0.5),
    ints: Int32Array.of(-7, 2_147_483_647),
    shorts: Int16Array.of(1, -2, 3),
    bytes: Int8Array.of(-128),
  },
  variables: [
    { name: "scalar", dims: [], attributes: {}, data: Float64Array.of(Math.PI) },
    { name: "byte", dims: ["x"], attributes: { units: "1" }, data: Int8Array.of(-128, 0, 127) },
    { name: "short", dims: ["x"], attributes: {}, data: Int16Array.of(-32_768, 258, 32_767) },
    { name: "int", dims: ["one"], attributes: {}, data: Int32Array.of(-2_147_483_648) },
    { name: "float", dims: ["y", "x"], attributes: {}, data: Float32Array.of(0.1, -0, 3e38, 1e-45, Infinity, NaN) },
    { name: "double", dims: ["x"], attributes: {}, data: Float64Array.of(0.1, Number.MAX_VALUE, 5e-324) },
  ],
};

describe("read back by the project's own reader", () => {
  test("dimensions, attributes and numbers of every type", async () => {
    const store = await openNetcdfClassic(memorySource("all.nc", bytesOf(ALL_TYPES)));
    expect(store.format).toBe("netCDF classic (CDF-1)");
    expect(store.notes).toEqual([]);
    expect(store.dimensions).toEqual([
      { name: "one", length: 1, isRecord: false },
      { name: "x", length: 3, isRecord: false },
      { name: "y", length: 2, isRecord: false },
    ]);
    expect({ ...store.attributes }).toEqual({
      title: "Höhe, 500 hPa",
      nothing: "",
      double: 0.1,
      doubles: [1.5, -2],
      float: 0.5,
      ints: [-7, 2_147_483_647],
      shorts: [1, -2, 3],
      bytes: -128,
    });
    expect(store.variables.map(({ name, type, dims }) => [name, type, dims.join()])).toEqual([
      ["scalar", "float64", ""],
      ["byte", "int8", "x"],
      ["short", "int16", "x"],
      ["int", "int32", "one"],
      ["float", "float32", "y,x"],
      ["double", "float64", "x"],
    ]);
    for (const { name, data } of ALL_TYPES.variables) {
      const { shape } = store.variables.find((variable) => variable.name === name) as { shape: readonly number[] };
      const read = await store.readNumbers(
        name,
        shape.map(() => 0),
        shape,
      );
      expect([...read], name).toEqual([...data]);
    }
  });

  test("any numbers of any type and shape", async () => {
    const anyNumbers = fc
      .tuple(fc.nat(4), fc.integer({ min: 1, max: 9 }), fc.integer({ min: 1, max: 9 }))
      .chain(([kind, a, b]) => {
        const size = { minLength: a * b, maxLength: a * b };
        const data: fc.Arbitrary<WrittenNumbers> = [
          fc.float64Array(size),
          fc.float32Array(size),
          fc.int32Array(size),
          fc.int16Array(size),
          fc.int8Array(size),
        ][kind] as fc.Arbitrary<WrittenNumbers>;
        return data.map((numbers) => ({ a, b, numbers }));
      });
    await fc.assert(
      fc.asyncProperty(anyNumbers, fc.boolean(), async ({ a, b, numbers }, isFleeting) => {
        const kept = numbers.slice();
        // A view into the middle of a longer array is written as what it shows.
        const wide = new (numbers.constructor as new (n: number) => WrittenNumbers)(numbers.length + 2);
        wide.set(numbers, 1);
        const file: WrittenFile = {
          dimensions: { a, b },
          attributes: {},
          variables: [
            { name: "n", dims: ["a", "b"], attributes: {}, data: wide.subarray(1, 1 + numbers.length) },
            { name: "after", dims: [], attributes: {}, data: Int16Array.of(1234) },
          ],
        };
        const pieces: Uint8Array[] = [];
        for (const piece of classicFile(file, isFleeting)) pieces.push(piece.slice());
        const store = await openNetcdfClassic(memorySource("n.nc", Uint8Array.from(Buffer.concat(pieces))));
        expect([...(await store.readNumbers("n", [0, 0], [a, b]))]).toEqual([...kept]);
        expect([...(await store.readNumbers("after", [], []))]).toEqual([1234]);
        expect([...wide.subarray(1, 1 + numbers.length)]).toEqual([...kept]); // not turned round where it stands
      }),
    );
  });

  test("a variable of several pieces is the same, whether or not they share memory", async () => {
    const n = 400_000; // 1.6 and 3.2 MB: pieces are 1 MiB
    const data = Float32Array.from({ length: n }, (_, i) => i / 7);
    const file: WrittenFile = {
      dimensions: { n },
      attributes: {},
      variables: [
        { name: "f", dims: ["n"], attributes: {}, data },
        { name: "d", dims: ["n"], attributes: {}, data: Float64Array.from(data) },
      ],
    };
    const fleeting: Uint8Array[] = [];
    for (const piece of classicFile(file, true)) fleeting.push(piece.slice());
    expect(fleeting.length).toBeGreaterThan(5);
    expect(Buffer.concat(fleeting).equals(Buffer.from(bytesOf(file)))).toBe(true);
    const store = await openNetcdfClassic(memorySource("long.nc", bytesOf(file)));
    expect(
      Buffer.from((await store.readNumbers("d", [0], [n])).buffer).equals(Buffer.from(Float64Array.from(data).buffer)),
    ).toBe(true);
    expect((await store.readNumbers("f", [n - 1], [1]))[0]).toBe(data[n - 1]);
  });

  test("a file of nothing is one", async () => {
    const store = await openNetcdfClassic(
      memorySource("none.nc", bytesOf({ dimensions: {}, attributes: {}, variables: [] })),
    );
    expect([store.dimensions, store.variables]).toEqual([[], []]);
  });
});

// The specification's own grammar: NetCDF Classic Format Specification (Unidata), "The Format in Detail".
test("the bytes are those of the specification", () => {
  const file: WrittenFile = {
    dimensions: { x: 3 },
    attributes: {},
    variables: [{ name: "ab", dims: ["x"], attributes: { u: "m" }, data: Int8Array.of(1, 2, -1) }],
  };
  const items: readonly (readonly number[])[] = [
    [0x43444601], // magic: CDF, version 1
    [0], // numrecs
    [10, 1, 1, 0x78000000, 3], // NC_DIMENSION, one: "x" of 3
    [0, 0], // gatt_list: ABSENT
    [11, 1, 2, 0x61620000], // NC_VARIABLE, one: "ab", padded with zeros
    [1, 0], // one dimension, number 0
    [12, 1, 1, 0x75000000, 2, 1, 0x6d000000], // NC_ATTRIBUTE, one: "u", NC_CHAR, "m"
    [1, 4, 100], // NC_BYTE, vsize with padding, begin: the length of this header
    [0x0102ff00], // three values, padded
  ];
  const words = items.flat();
  const view = new DataView(bytesOf(file).buffer);
  expect(view.byteLength).toBe(4 * words.length);
  words.forEach((word, i) => {
    expect(view.getUint32(4 * i), `word ${i}`).toBe(word);
  });
});

describe.skipIf(!HAS_NCDUMP)("read by the netCDF library (ncdump)", () => {
  test("every type", () => {
    const text = dumped(bytesOf(ALL_TYPES), "all.nc");
    for (const part of [
      "one = 1 ; x = 3 ; y = 2 ;",
      "double scalar ;",
      "byte byte(x) ;",
      "short short(x) ;",
      "int int(one) ;",
      "float float(y, x) ;",
      "double double(x) ;",
      ':title = "Höhe, 500 hPa" ;',
      ':nothing = "" ;',
      ":double = 0.10000000000000001 ;",
      ":doubles = 1.5, -2. ;",
      ":float = 0.5f ;",
      ":ints = -7, 2147483647 ;",
      ":shorts = 1s, -2s, 3s ;",
      ":bytes = -128b ;",
      "scalar = 3.1415926535897931 ;",
      "byte = -128, 0, 127 ;",
      "short = -32768, 258, 32767 ;",
      "int = -2147483648 ;",
      "float = 0.100000001, -0, 3.00000001e+38, 1.40129846e-45, Infinityf, NaNf ;",
      "double = 0.10000000000000001, 1.7976931348623157e+308, 4.9406564584124654e-324 ;",
    ])
      expect(text).toContain(part);
  });

  test("the small file of the other tests", () => {
    const text = dumped(bytesOf(smallFile()), "small.nc");
    expect(text).toContain("float z(time, lev, lat, lon) ;");
    expect(text).toContain(
      "time = 0, 24 ; lev = 250, 500 ; lat = -45, 0, 45 ; lon = 0, 90, 180, 270 ; z = 0, 1, 2, 3,",
    );
    expect(text).toContain("44, 45, 46, 47 ; }");
  });
});

describe("large files", () => {
  // Variables that share their numbers make 3 GiB of file without the memory.
  const shared = new Float64Array(2 ** 23); // 64 MiB
  const large: WrittenFile = {
    dimensions: { n: shared.length },
    attributes: {},
    variables: Array.from({ length: 48 }, (_, i) => ({ name: `v${i}`, dims: ["n"], attributes: {}, data: shared })),
  };
  const size = (file: WrittenFile) => file.variables.reduce((sum, { data }) => sum + data.byteLength, 0);

  test("over 2 GiB the offsets are 64 bits wide, and each variable begins where the last ends", () => {
    const header = classicFile(large).next().value as Uint8Array<ArrayBuffer>;
    const { version, variables, headerBytes } = classicHeader(header, "large.nc", header.length + size(large));
    expect([version, headerBytes]).toEqual([2, header.length]);
    variables.forEach(({ begin }, i) => {
      expect(begin).toBe(header.length + i * shared.byteLength);
    });
    expect(variables[47]?.begin).toBeGreaterThan(2 ** 31);
  });

  test("just under 2 GiB they are not", () => {
    const under = { ...large, variables: large.variables.slice(0, 31) };
    const header = classicFile(under).next().value as Uint8Array<ArrayBuffer>;
    expect(classicHeader(header, "under.nc", header.length + size(under)).version).toBe(1);
    const over = { ...large, variables: large.variables.slice(0, 32) };
    expect((classicFile(over).next().value as Uint8Array)[3]).toBe(2);
  });

  test.skipIf(!HAS_NCDUMP)("ncdump reads the header as 64-bit offset", () => {
    // The file is as long as it says, but its numbers were never written: a hole.
    const header = classicFile(large).next().value as Uint8Array<ArrayBuffer>;
    const text = dumped(header, "large.nc", header.length + size(large), ["-h"]);
    expect(text).toContain("n = 8388608 ; variables: double v0(n) ;");
    expect(text).toContain("double v47(n) ; }");
    expect(dumped(header, "large.nc", header.length + size(large), ["-k"])).toBe("64-bit offset ");
  });

  test("a variable over 4 GiB is refused unless it is the last", () => {
    // Only its size is looked at.
    const long = Object.defineProperties(new Int8Array(0), {
      length: { value: 2 ** 32 },
      byteLength: { value: 2 ** 32 },
    });
    const before = { name: "long", dims: ["a", "b"], attributes: {}, data: long };
    const after = { name: "short", dims: [], attributes: {}, data: Int8Array.of(1) };
    const file = (variables: WrittenFile["variables"]) =>
      classicFile({ dimensions: { a: 2 ** 16, b: 2 ** 16 }, attributes: {}, variables });
    expect(() => file([before, after]).next()).toThrow(
      "Variable long has 4294967296 bytes; netCDF 64-bit offset holds 4294967292 of each but the last. Write it in pieces, or last.",
    );
    const header = file([after, before]).next().value as Uint8Array<ArrayBuffer>;
    const { variables } = classicHeader(header, "long.nc", header.length + 4 + 2 ** 32);
    expect(variables[1]).toMatchObject({ name: "long", dataBytes: 2 ** 32, begin: header.length + 4 });
  });
});

describe("refused before the first piece", () => {
  const z = { name: "z", dims: ["x"], attributes: {}, data: Float32Array.of(1, 2) };
  test.each([
    [{ x: 0 }, [], "Dimension x of length 0 cannot be written"],
    [{ x: 1.5 }, [], "Dimension x of length 1.5 cannot be written"],
    [{ x: 2 ** 31 }, [], "Dimension x of length 2147483648 cannot be written"],
    [{ x: 2 }, [z, z], "Variable z would be written twice"],
    [{ y: 2 }, [z], "Variable z names a dimension x that the file does not have"],
    [{ x: 3 }, [z], "Variable z has 2 values; its dimensions x hold 3"],
    [{ x: 2 }, [{ ...z, dims: ["toString"] }], "names a dimension toString that the file does not have"],
  ] as const)("%#", (dimensions, variables, words) => {
    const start = () => classicFile({ dimensions, attributes: {}, variables } as unknown as WrittenFile).next();
    expect(start).toThrow(expect.objectContaining({ name: "ShapeError" }));
    expect(start).toThrow(words);
  });
});
