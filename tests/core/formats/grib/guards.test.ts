import { describe, expect, test } from "vitest";
import { jpeg2000Decoder } from "../../../../app/codecs/jpeg2000.ts";
import { LIBRARIES } from "../../../../app/codecs/libraries.ts";
import { decodedPng } from "../../../../app/codecs/png.ts";
import { type AecForm, aecSamples } from "../../../../core/formats/grib/aec.ts";
import { presentPoints } from "../../../../core/formats/grib/bitmap.ts";
import { complexValues } from "../../../../core/formats/grib/complex-packing.ts";
import type { GribEntry, GridDefinition } from "../../../../core/formats/grib/grib-index.ts";
import { gridAxes } from "../../../../core/formats/grib/grid-axes.ts";
import { ieeeValues } from "../../../../core/formats/grib/ieee-values.ts";
import { imageValues } from "../../../../core/formats/grib/image-packing.ts";
import { openGrib } from "../../../../core/formats/grib/open-grib.ts";
import { scannedIndex } from "../../../../core/formats/grib/scan.ts";
import { simpleValues } from "../../../../core/formats/grib/simple-packing.ts";
import { memorySource } from "../../../../core/formats/memory-source.ts";
import { smallFile } from "./small-files.ts";

const ONE = { reference: 0, binary: 1, decimal: 1 };

async function partsOf(name: string) {
  const { bytes } = smallFile(name);
  const [entry] = (await scannedIndex(memorySource(name, bytes))).entries as [GribEntry];
  const packing = bytes.slice(entry.packing.at, entry.packing.at + entry.packing.length);
  const data = bytes.slice(entry.data.at, entry.data.at + entry.data.length + 4);
  return { bytes, entry, packing, data, image: data.slice(5, entry.data.length) };
}

test("simple packing: widths over 32 bits and missing bytes", () => {
  const bytes = new Uint8Array(14);
  expect(() => simpleValues(bytes, 0, 10, 33, 1, ONE)).toThrow("33 bits are wider than any");
  expect(() => simpleValues(bytes, 0, 10, 9, 9, ONE)).toThrow("9 values of 9 bits do not fit into 10 bytes");
  expect(simpleValues(bytes, 0, 10, 9, 8, ONE)).toEqual(new Float64Array(8));
});

test("IEEE numbers: precision and missing bytes", () => {
  expect(() => ieeeValues(new Uint8Array(64), 0, 64, 3, 1)).toThrow("precision 3");
  expect(() => ieeeValues(new Uint8Array(64), 0, 64, 2, 9)).toThrow("9 values of 8 bytes do not fit into 64");
});

test("a bitmap that is too short", () => {
  expect(() => presentPoints(new Uint8Array(2), 17)).toThrow("too short for 17 points");
  expect(presentPoints(Uint8Array.of(0xff, 0xff), 13)).toBe(13);
});

describe("CCSDS", () => {
  const form: AecForm = { bits: 8, blockSize: 8, blocksPerReference: 16, flags: 8 };
  test.each([
    [{ bits: 0 }, "0 bits per sample"],
    [{ bits: 33 }, "33 bits per sample"],
    [{ blockSize: 7 }, "blocks of 7 samples"],
    [{ blocksPerReference: 0 }, "0 blocks per reference"],
    [{ flags: 9 }, "samples are signed"],
    [{ flags: 40 }, "intervals are padded"],
  ])("a form that is none: %o", (change, words) => {
    expect(() => aecSamples(new Uint8Array(100), { ...form, ...change }, 8)).toThrow(words);
  });
  test("a stream that ends too early, in a unary code and in whole samples", () => {
    expect(() => aecSamples(new Uint8Array(4), form, 800)).toThrow("they end too early");
    expect(() => aecSamples(Uint8Array.of(0xff), form, 8)).toThrow("they end too early");
    expect(() => aecSamples(new Uint8Array(1), form, 1_000_000)).toThrow("1 bytes for 1000000 samples");
  });
  test("a run of zero blocks beyond its interval", () => {
    // No blocks of samples (000), zero blocks (0), reference 0, then 19 zeros and a one: 19 blocks of an interval of 16.
    const bits = `0000${"0".repeat(8)}${"0".repeat(19)}1`;
    const bytes = Uint8Array.from({ length: 20 }, (_, i) =>
      Number.parseInt(bits.slice(8 * i, 8 * i + 8).padEnd(8, "0"), 2),
    );
    expect(() => aecSamples(bytes, form, 8 * 32)).toThrow("beyond its interval");
  });
});

describe("complex packing", () => {
  test.each<[string, string, (packing: Uint8Array) => void, string | RegExp]>([
    ["hand_complex", "a missing-value kind", (p) => p.set([3], 22), "unknown kind (3)"],
    ["hand_complex", "more groups than values", (p) => p.set([0, 0, 1, 0], 31), "256 groups for 40 values"],
    ["hand_complex", "group widths", (p) => p.set([40], 35), /group 1 has values of \d+ bits/],
    ["hand_complex", "group descriptions", (p) => p.set([33], 36), "described with over 32 bits"],
    ["hand_complex", "groups that do not fit", (p) => p.set([0, 0, 0, 40], 31), /groups do not fit into|groups hold/],
    [
      "hand_complex",
      "lengths that do not add up",
      (p) => p.set([0, 0, 0, 9], 42),
      /its groups hold \d+ values, not 40/,
    ],
    ["hand_complex", "values beyond the data", (p) => p.set([9], 35), /reaches beyond its data/],
    ["hand_difference_1", "an order", (p) => p.set([3], 47), "of order 3"],
    ["hand_difference_1", "octets of first values", (p) => p.set([5], 48), "have 5 octets"],
  ])("%s, %s", async (name, _, change, words) => {
    const { packing, data, entry } = await partsOf(name);
    change(packing);
    const template = name === "hand_complex" ? 2 : 3;
    expect(() => complexValues(packing, template, data, 5, entry.data.length, 40)).toThrow(words);
  });
  test("a section 5, and first values, that end early", async () => {
    const { packing, data } = await partsOf("hand_difference_1");
    expect(() => complexValues(packing.slice(0, 47), 3, data, 5, 60, 40)).toThrow("section 5 has 47 bytes");
    expect(() => complexValues(packing, 3, data, 5, 7, 40)).toThrow("end before the first values");
  });
});

describe("images", () => {
  test.each(["png", "jpeg2000"] as const)("%s: no beginning, another size, an end that is missing", async (kind) => {
    const { image } = await partsOf(kind === "png" ? "png_16" : "jpeg_16");
    const values = (bytes: Uint8Array, count: number) => imageValues(kind, bytes, LIBRARIES, count, ONE);
    await expect(values(image.slice(30), 40)).rejects.toThrow("has no beginning");
    await expect(values(image, 41)).rejects.toThrow("8 × 5 points holds not the 41 that it should");
    await expect(values(image.slice(0, image.length - 40), 40)).rejects.toMatchObject({ name: "FormatError" });
  });
  test("the decoders say in words what is wrong with what is no image", async () => {
    const decode = await jpeg2000Decoder();
    expect(() => decode(new Uint8Array(60))).toThrow(/JPEG 2000 image/);
    expect(() => decodedPng(new Uint8Array(60))).toThrow(/a PNG image cannot be read/);
    // And they still work after that.
    const { image } = await partsOf("jpeg_12");
    expect((await jpeg2000Decoder())(image).values.length).toBe(40);
  });
  test("a library that throws anything else is answered for", async () => {
    const { image } = await partsOf("png_16");
    const broken = {
      ...LIBRARIES,
      png: async () => () => {
        throw new Error("no luck");
      },
    };
    await expect(imageValues("png", image, broken, 40, ONE)).rejects.toThrow("its PNG image is damaged (no luck)");
    const short = { ...LIBRARIES, png: async () => () => ({ width: 8, height: 5, values: new Uint8Array(39) }) };
    await expect(imageValues("png", image, short, 40, ONE)).rejects.toThrow("gives 39 points, not 40");
  });
});

describe("grids", () => {
  const regular: GridDefinition = {
    kind: "regular",
    ni: 8,
    nj: 5,
    firstLat: 60,
    firstLon: 0,
    lastLat: -60,
    lastLon: 315,
    lonStep: 45,
    parallels: 0,
    scan: 0,
    precision: 1e-6,
  };
  test("rows against the scanning mode, and Gaussian rows that do not fit", () => {
    expect(() => gridAxes({ ...regular, scan: 64 })).toThrow("against the direction that its scanning mode says");
    const gaussian: GridDefinition = { ...regular, kind: "gaussian", parallels: 2, nj: 4, firstLat: 59.444 };
    expect(gridAxes(gaussian).grid.lat.length).toBe(4);
    expect(() => gridAxes({ ...gaussian, nj: 5 })).toThrow("its 5 rows are more than the 4");
    expect(() => gridAxes({ ...gaussian, firstLat: 19.876 })).toThrow("run beyond the pole");
  });
  test("an end that does not fit gives way to a step that closes the circle; a single row or column stands alone", () => {
    expect([...gridAxes({ ...regular, lastLon: 360 }).grid.lon]).toEqual([0, 45, 90, 135, 180, 225, 270, 315]);
    const single = gridAxes({ ...regular, ni: 1, nj: 1 }).grid;
    expect([[...single.lat], [...single.lon]]).toEqual([[60], [0]]);
    expect(gridAxes({ ...regular, firstLon: 180, lastLon: 135 }).grid.lon[0]).toBe(180);
    // 1435 of 1440 columns of a quarter degree are no circle, however coarse the header's step is.
    const part = gridAxes({ ...regular, ni: 1435, lastLon: 358.5, lonStep: 0.25, precision: 1e-3 });
    expect(part.grid.closesCircle).toBe(false);
  });

  const words = async (
    name: string,
    change: (bytes: Uint8Array, view: DataView) => void,
  ): Promise<string | undefined> => {
    const bytes = smallFile(name).bytes.slice();
    change(bytes, new DataView(bytes.buffer));
    const { leftOut } = (await openGrib(memorySource("g.grib", bytes), LIBRARIES, [])).contents;
    return leftOut[0]?.why;
  };
  /** First byte of a section of an edition 2 message. */
  const section = (bytes: Uint8Array, number: number): number => {
    let at = 16;
    while (bytes[at + 4] !== number) at += new DataView(bytes.buffer).getUint32(at);
    return at;
  };
  const name = "simple2_12";
  test.each<[string, (bytes: Uint8Array, view: DataView) => void, RegExp]>([
    ["offset rows", (b) => b.set([0x08], section(b, 3) + 71), /offset from one another/],
    ["a catalogue's grid", (b) => b.set([1], section(b, 3) + 5), /number 1 of a catalogue/],
    ["another number of points", (b) => b.set([41], section(b, 3) + 9), /is said to have 41 points/],
    ["no columns", (b, v) => v.setUint32(section(b, 3) + 30, 0), /has 0 columns/],
    ["too many points", (b, v) => v.setUint32(section(b, 3) + 30, 0x7fffffff), /too large to be read/],
    ["rows of lists", (b) => b.set([2], section(b, 3) + 10), /reduced latitude–longitude/],
    ["an unknown grid", (b) => b.set([0x7f], section(b, 3) + 13), /type 127 of GRIB edition 2/],
    ["no bitmap to use again", (b) => b.set([254], section(b, 6) + 5), /a bitmap that does not stand before it/],
    ["a centre's bitmap", (b) => b.set([7], section(b, 6) + 5), /bitmap of its centre/],
    ["a day that is none", (b) => b.set([13], section(b, 1) + 14), /is not a day/],
    ["no pressure", (b, v) => v.setUint32(section(b, 4) + 24, 0), /its pressure is 0 Pa/],
    ["an unknown product", (b) => b.set([0x63], section(b, 4) + 8), /template, 4\.99, is not read/],
  ])("%s in edition 2", async (_, change, why) => {
    expect(await words(name, change)).toMatch(why);
  });
  test.each<[string, (bytes: Uint8Array, at: number) => void, RegExp]>([
    ["an unknown grid", (b, at) => b.set([77], at + 5), /type 77 of GRIB edition 1/],
    ["rows of lists", (b, at) => b.set([0xff, 0xff], at + 6), /reduced latitude–longitude/],
    ["a monthly mean's day 0", (b) => b.set([0], 8 + 14), /is not a day/],
    ["no pressure", (b) => b.set([0, 0], 8 + 10), /its pressure is 0 hPa/],
    ["an unknown range of time", (b) => b.set([99], 8 + 20), /time range indicator 99/],
  ])("%s in edition 1", async (_, change, why) => {
    const at = (bytes: Uint8Array): number =>
      8 + (((bytes[8] as number) << 16) | ((bytes[9] as number) << 8) | (bytes[10] as number));
    expect(await words("simple1_12", (b) => change(b, at(b)))).toMatch(why);
  });
  test("values that are not as many as the points", async () => {
    const bytes = smallFile(name).bytes.slice();
    bytes.set([39], section(bytes, 5) + 8);
    const file = await openGrib(memorySource("g.grib", bytes), LIBRARIES, []);
    await expect(file.read(file.contents.fields[0]?.key ?? "", { times: [0, 1] })).rejects.toThrow(
      "g.grib: the message at byte 0 cannot be read: it holds 39 values, and its grid has 40 points that are not missing.",
    );
  });
});
