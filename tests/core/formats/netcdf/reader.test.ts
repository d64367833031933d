import { closeSync, ftruncateSync, mkdtempSync, openSync, readFileSync, readSync, rmSync, writeSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { NetCDFReader } from "netcdfjs";
import { expect, test } from "vitest";
import type { ByteSource } from "../../../../core/formats/byte-source.ts";
import { memorySource } from "../../../../core/formats/memory-source.ts";
import { openNetcdfClassic } from "../../../../core/formats/netcdf/classic-store.ts";
import { classicHeader } from "../../../../core/formats/netcdf/header.ts";
import type { StoredVariable } from "../../../../core/formats/variable-store.ts";
import { bytesOf, referenceBytes } from "../written.ts";

interface Held {
  readonly variables: Readonly<
    Record<
      string,
      {
        readonly dims: string[];
        readonly shape: number[];
        readonly values: number[] | string;
        readonly attributes: Readonly<Record<string, unknown>>;
      }
    >
  >;
  readonly attributes: Readonly<Record<string, unknown>>;
}

// Written by reference/make_files.py: the netCDF C library wrote the files, scipy.io.netcdf_file read them.
const HELD: Readonly<Record<string, Held>> = JSON.parse(
  readFileSync(new URL("reference/values.json", import.meta.url), "utf8"),
);

function zeros(variable: StoredVariable): number[] {
  return variable.shape.map(() => 0);
}

test.each(Object.keys(HELD))("%s reads as scipy reads it", async (name) => {
  const held = HELD[name] as Held;
  const store = await openNetcdfClassic(memorySource(name, referenceBytes(name)));
  expect(store.variables.map((variable) => variable.name).sort()).toEqual(Object.keys(held.variables).sort());
  expect({ ...store.attributes }).toEqual(held.attributes);
  expect(store.notes).toEqual([]);
  for (const variable of store.variables) {
    const want = held.variables[variable.name] as Held["variables"][string];
    expect(variable.dims).toEqual(want.dims);
    expect(variable.shape).toEqual(want.shape);
    expect({ ...variable.attributes }).toEqual(want.attributes);
    const got = [...(await store.readNumbers(variable.name, zeros(variable), variable.shape))];
    const values = typeof want.values === "string" ? [...want.values].map((c) => c.charCodeAt(0)) : want.values;
    expect(got, variable.name).toEqual(values); // exact: each stored number is a float64
  }
});

test.each(["records_1.nc", "records_5.nc", "one_short_1.nc", "types_2.nc"])(
  "every slab of %s is that part of the whole",
  async (name) => {
    const store = await openNetcdfClassic(memorySource(name, referenceBytes(name)));
    for (const variable of store.variables) {
      const { shape } = variable;
      const whole = await store.readNumbers(variable.name, zeros(variable), shape);
      if (shape.length !== 2) continue;
      const [n, m] = shape as [number, number];
      for (let a = 0; a < n; a++)
        for (let na = 0; na <= n - a; na++)
          for (let b = 0; b < m; b++)
            for (let nb = 0; nb <= m - b; nb++) {
              const want: number[] = [];
              for (let i = a; i < a + na; i++) for (let j = b; j < b + nb; j++) want.push(whole[i * m + j] as number);
              expect([...(await store.readNumbers(variable.name, [a, b], [na, nb]))]).toEqual(want);
            }
    }
  },
);

// netcdfjs 4.0.0 reads neither CDF-5 nor, rightly, signed bytes and letters beyond ASCII: such attributes are not compared.
test.each(Object.keys(HELD).filter((name) => !name.includes("_5")))("%s: the header is what netcdfjs finds", (name) => {
  const bytes = referenceBytes(name);
  const own = classicHeader(bytes, name, bytes.length);
  const other = new NetCDFReader(bytes);
  expect(own.version).toBe(other.version === "classic format" ? 1 : 2);
  expect(own.dimensions).toEqual(other.dimensions.map(({ name: dim, size }) => ({ name: dim, length: size })));
  const TYPES: Readonly<Record<string, string>> = {
    byte: "int8",
    char: "char",
    short: "int16",
    int: "int32",
    float: "float32",
    double: "float64",
  };
  expect(own.variables.length).toBe(other.variables.length);
  own.variables.forEach((variable, i) => {
    const theirs = other.variables[i] as (typeof other.variables)[number];
    expect(variable.name).toBe(theirs.name);
    expect(variable.dimIds).toEqual(theirs.dimensions);
    expect(variable.type).toBe(TYPES[theirs.type]);
    expect(variable.begin).toBe(theirs.offset);
    expect(variable.isRecord).toBe(theirs.record);
    for (const attribute of theirs.attributes as readonly { name: string; type: string; value: unknown }[]) {
      if (attribute.type === "byte" || attribute.name === "text") continue;
      expect(variable.attributes[attribute.name], attribute.name).toEqual(attribute.value);
    }
  });
});

test("a cut file keeps its whole records, and says so", async () => {
  const bytes = referenceBytes("records_1.nc");
  const header = classicHeader(bytes, "records_1.nc", bytes.length);
  const first = Math.min(...header.variables.filter(({ isRecord }) => isRecord).map(({ begin }) => begin));
  // The last variable of a record, `one`, is a short: its record is whole two bytes before the record's padded end.
  const wholeAt = (records: number) => first + records * header.recordStride - 2;
  for (const [length, records] of [
    [wholeAt(4), 4],
    [wholeAt(4) - 1, 3],
    [wholeAt(3), 3],
    [wholeAt(3) - 1, 2],
    [wholeAt(1) - 1, 0],
    [first - 1, 0],
  ] as const) {
    const store = await openNetcdfClassic(memorySource("cut.nc", bytes.slice(0, length)));
    expect(store.dimensions.find(({ isRecord }) => isRecord)?.length, `${length} bytes`).toBe(records);
    if (records === 4) expect(store.notes).toEqual([]);
    else expect(store.notes[0]).toContain(`cut.nc is cut short: its header promises 4 records, ${records} are whole`);
    const s = await store.readNumbers("s", [0, 0], [records, 3]);
    const all = (HELD["records_1.nc"] as Held).variables.s as Held["variables"][string];
    expect([...s]).toEqual(all.values.slice(0, 3 * records));
  }
});

test("a variable of fixed size that is cut is noted, read as far as it goes, and refused beyond", async () => {
  const bytes = referenceBytes("types_1.nc");
  const store = await openNetcdfClassic(memorySource("cut.nc", bytes.slice(0, bytes.length - 60)));
  expect(store.notes).toEqual(["cut.nc is cut short: variable cube is not whole. Fetch the file again."]);
  expect([...(await store.readNumbers("cube", [1, 0, 0], [1, 1, 3]))]).toEqual([7.5, 8, 8.5]);
  await expect(store.readNumbers("cube", [2, 0, 0], [1, 5, 3])).rejects.toThrow("cut.nc, cube: the file ends at byte");
});

test("a size that the file cannot hold is refused before memory is taken for it", async () => {
  const bytes = referenceBytes("one_short_1.nc");
  const header = classicHeader(bytes, "one_short_1.nc", bytes.length);
  expect(header.dimensions[1]).toEqual({ name: "n", length: 3 });
  // The dimension list starts at byte 8; "t" takes 12 bytes there, "n" its name's 8, then its length.
  const at = 16 + 12 + 8;
  const view = new DataView(bytes.buffer);
  expect(view.getUint32(at)).toBe(3);
  view.setUint32(at, 0x7fffffff);
  const store = await openNetcdfClassic(memorySource("huge.nc", bytes));
  const before = process.memoryUsage().arrayBuffers;
  await expect(store.readNumbers("x", [0], [0x7fffffff])).rejects.toThrow("huge.nc, x: the file ends at byte 174");
  expect(process.memoryUsage().arrayBuffers - before).toBeLessThan(2 ** 20); // 16 GiB would have been asked for
});

test("slabs and names that are not in the file are refused in words", async () => {
  const store = await openNetcdfClassic(memorySource("a.nc", referenceBytes("records_1.nc")));
  await expect(store.readNumbers("nothing", [], [])).rejects.toMatchObject({
    name: "NotFoundError",
    message: "a.nc holds no variable nothing.",
  });
  for (const [start, count] of [
    [
      [0, 0],
      [5, 3],
    ],
    [
      [-1, 0],
      [1, 3],
    ],
    [
      [0, 1],
      [1, 3],
    ],
    [[0], [1]],
    [
      [0.5, 0],
      [1, 1],
    ],
    [
      [0, 0],
      [-1, 1],
    ],
    [
      [0, 0],
      [Number.NaN, 1],
    ],
  ] as const)
    await expect(store.readNumbers("s", start, count), `${start} ${count}`).rejects.toMatchObject({
      name: "ShapeError",
    });
});

/** The header bytes with the 32-bit word at `at` replaced. */
function withWord(bytes: Uint8Array, at: number, word: number): Uint8Array {
  const changed = bytes.slice();
  new DataView(changed.buffer).setUint32(at, word);
  return changed;
}

test("every impossible item of a header is refused, with its place", async () => {
  const one = referenceBytes("one_short_1.nc"); // dimensions at 8, no global attributes at 40, variables at 48
  const five = referenceBytes("one_short_5.nc");
  const open = (bytes: Uint8Array) => openNetcdfClassic(memorySource("bad.nc", bytes));
  const cases: readonly (readonly [Uint8Array, string])[] = [
    [withWord(one, 0, 0x43444603), "it does not begin with CDF and a known version"],
    [withWord(one, 8, 99), "byte 8: a list of dimensions should start here"],
    [withWord(one, 12, 0xffff), "65535 dimensions do not fit into the file"],
    [withWord(one, 16, 0xfffff), "letters of a name do not fit into the file"],
    [withWord(one, 40, 10), "a list of attributes should start here"],
    [withWord(one, 48, 12), "a list of variables should start here"],
    [withWord(one, 64, 200), "200 dimensions of a variable do not fit into the file"],
    [withWord(one, 68, 9), "variable x names dimension 9, which it cannot have"],
    [withWord(one, 80, 77), "type 77 is not known"],
    [withWord(one, 80, 7), "type 7 is not known"], // unsigned bytes are CDF-5's alone
    [withWord(five, 16, 0xffffffff), "the number of dimensions is impossibly large"],
    [one.slice(0, 126), "it goes on beyond the file's 126 bytes"],
  ];
  for (const [bytes, words] of cases)
    await expect(open(bytes), words).rejects.toMatchObject({
      name: "FormatError",
      message: expect.stringContaining(words),
    });
  const many = new Uint8Array(6000);
  many.set(one.slice(0, 64));
  await expect(open(withWord(many, 64, 1100))).rejects.toThrow("variable x has 1100 dimensions");
});

test("a variable too large for any file is refused, also where its size is no number", () => {
  const u64 = (high: number, low: number) =>
    [high, low].flatMap((w) => [w >>> 24, (w >>> 16) & 255, (w >>> 8) & 255, w & 255]);
  const u32 = (w: number) => u64(0, w).slice(4);
  const name = (letter: string) => [...u64(0, 1), letter.charCodeAt(0), 0, 0, 0];
  const header = (ids: readonly number[]) =>
    Uint8Array.from([
      ...[0x43, 0x44, 0x46, 5],
      ...u64(0, 0),
      ...u32(10),
      ...u64(0, 2),
      ...[...name("a"), ...u64(0x001fffff, 0xffffffff)],
      ...[...name("b"), ...u64(0, 0)],
      ...[...u32(0), ...u64(0, 0)],
      ...u32(11),
      ...u64(0, 1),
      ...[...name("v"), ...u64(0, ids.length), ...ids.flatMap((id) => u64(0, id))],
      ...[...u32(0), ...u64(0, 0), ...u32(6), ...u64(0, 8), ...u64(0, 400)],
    ]);
  for (const n of [1, 2, 30]) {
    const bytes = header(new Array<number>(n).fill(0));
    expect(() => classicHeader(bytes, "v.nc", 1000)).toThrow("variable v is impossibly large");
  }
});

test("a header longer than the first read is fetched again, longer", async () => {
  const text = "x".repeat(300_000);
  const bytes = bytesOf({
    dimensions: { n: 2 },
    attributes: { history: text },
    variables: [{ name: "v", dims: ["n"], attributes: {}, data: Int16Array.of(5, -6) }],
  });
  const store = await openNetcdfClassic(memorySource("long.nc", bytes));
  expect(store.attributes.history).toBe(text);
  expect([...(await store.readNumbers("v", [0], [2]))]).toEqual([5, -6]);
});

test("a header that does not end within bounds is given up, without reading the whole file", async () => {
  const prefix = referenceBytes("one_short_1.nc");
  new DataView(prefix.buffer).setUint32(16, 0x7fffffff); // a name of 2 GiB
  let most = 0;
  const source: ByteSource = {
    name: "endless.nc",
    size: 2 ** 40,
    async read(_, length) {
      most = Math.max(most, length);
      const bytes = new Uint8Array(length);
      bytes.set(prefix.subarray(0, length));
      return bytes;
    },
    readNow: () => new Uint8Array(0),
  };
  await expect(openNetcdfClassic(source)).rejects.toThrow("endless.nc: the netCDF header does not end within");
  expect(most).toBeLessThanOrEqual(64 * 1024);
});

test.each([2, 5] as const)("CDF-%d: values beyond 4 GiB are found", async (version) => {
  // A header of the netCDF library, its last variable's begin moved to 5 GiB; the file is sparse.
  const header = referenceBytes(`types_${version}.nc`);
  const begin = 5 * 2 ** 30;
  const laidOut = classicHeader(header, "far.nc", header.length).variables.find(({ name }) => name === "cube");
  const view = new DataView(header.buffer);
  let at = -1;
  for (let i = 0; i + 8 <= header.length; i += 4)
    if (view.getUint32(i) === 0 && view.getUint32(i + 4) === laidOut?.begin) at = i;
  view.setBigUint64(at, BigInt(begin));
  const folder = mkdtempSync(join(tmpdir(), "isohypse-"));
  const file = openSync(join(folder, "far.nc"), "w+");
  try {
    ftruncateSync(file, begin + 4 * 45);
    writeSync(file, header, 0, header.length, 0);
    const data = Buffer.alloc(4 * 45);
    for (let i = 0; i < 45; i++) data.writeFloatBE(i + 0.25, 4 * i);
    writeSync(file, data, 0, data.length, begin);
    const source: ByteSource = {
      name: "far.nc",
      size: begin + 4 * 45,
      async read(offset, length) {
        const bytes = new Uint8Array(length);
        expect(readSync(file, bytes, 0, length, offset)).toBe(length);
        return bytes;
      },
      readNow: () => new Uint8Array(0),
    };
    const store = await openNetcdfClassic(source);
    expect([...(await store.readNumbers("cube", [2, 3, 0], [1, 2, 3]))]).toEqual([
      39.25, 40.25, 41.25, 42.25, 43.25, 44.25,
    ]);
    expect([...(await store.readNumbers("s", [0], [3]))]).toEqual([-32768, 0, 32767]);
  } finally {
    closeSync(file);
    rmSync(folder, { recursive: true });
  }
});
