import { existsSync, readFileSync } from "node:fs";
import { describe, expect, test } from "vitest";
import { LIBRARIES } from "../../../../app/codecs/libraries.ts";
import type { ByteSource } from "../../../../core/formats/byte-source.ts";
import type { GribIndex } from "../../../../core/formats/grib/grib-index.ts";
import { looksLikeGrib, openGrib } from "../../../../core/formats/grib/open-grib.ts";
import { scannedIndex } from "../../../../core/formats/grib/scan.ts";
import { memorySource } from "../../../../core/formats/memory-source.ts";
import { dataFile } from "../data-folder.ts";
import { openSmall, smallFile } from "./small-files.ts";

/** A source that counts what is read of it. */
function counted(source: ByteSource) {
  const counts = { reads: 0, bytes: 0 };
  const read: ByteSource["read"] = (offset, length, into) => {
    counts.reads += 1;
    counts.bytes += length;
    return source.read(offset, length, into);
  };
  return { counts, source: { ...source, read } };
}

function joined(...pieces: readonly Uint8Array[]): Uint8Array {
  return Uint8Array.from(pieces.flatMap((piece) => [...piece]));
}

const GOOD = smallFile("simple2_12").bytes;
const OTHER = smallFile("bitmap1").bytes;

test("a GRIB file is known by its first bytes", () => {
  expect(looksLikeGrib(GOOD)).toBe(true);
  expect(looksLikeGrib(new TextEncoder().encode("GRI"))).toBe(false);
  expect(looksLikeGrib(new TextEncoder().encode("CDF\u0001GRIB"))).toBe(false);
});

describe("what stands between messages, and damage", () => {
  test("zeros and junk are passed over; what only looks like a message is told", async () => {
    const file = await openSmall("padded");
    expect(file.contents.fields.map(({ variable }) => variable)).toEqual(["eastward_wind", "northward_wind"]);
    expect(file.contents.notes).toEqual([
      expect.stringMatching(/at byte 365 is damaged \(it says to be of edition 66/),
      expect.stringMatching(/at byte 369 is damaged \(it says to be of edition 66/),
    ]);
  });

  test.each([
    [
      "a length that is too long",
      (bytes: Uint8Array) => bytes.set([1], 13),
      /would end at byte 65\d+, and the file has/,
    ],
    ["no end mark", (bytes: Uint8Array) => bytes.set([0], bytes.length - 1), /do not end in 7777/],
    ["a section that is too long", (bytes: Uint8Array) => bytes.set([0, 0, 4, 0], 16), /no section that fits/],
    ["a section of no number", (bytes: Uint8Array) => bytes.set([77], 20), /no section that fits \(number 77/],
    ["an edition that does not exist", (bytes: Uint8Array) => bytes.set([3], 7), /of edition 3/],
  ])("%s: the message is skipped and told with its place, the rest is read", async (_, damage, words) => {
    const bad = GOOD.slice();
    damage(bad);
    const file = await openGrib(memorySource("d.grib", joined(OTHER, bad, OTHER)), LIBRARIES, []);
    expect(file.contents.notes[0]).toMatch(words);
    expect(file.contents.notes[0]).toContain(`d.grib: the message at byte ${OTHER.length} is damaged`);
    // Both others are there: the last of the two counts.
    expect(file.contents.notes.at(-1)).toContain("is in the file twice");
    expect(file.contents.fields.length).toBe(1);
  });

  test("a file cut short keeps its whole messages", async () => {
    const cut = joined(OTHER, GOOD.slice(0, GOOD.length - 30));
    const file = await openGrib(memorySource("cut.grib", cut), LIBRARIES, []);
    expect(file.contents.fields.length).toBe(1);
    expect(file.contents.notes[0]).toMatch(/message at byte \d+ is damaged/);
  });

  test("nothing but damage is an error in words", async () => {
    await expect(openGrib(memorySource("x.grib", GOOD.slice(0, 100)), LIBRARIES, [])).rejects.toThrow(
      /x\.grib: the message at byte 0 is damaged/,
    );
    await expect(openGrib(memorySource("y.grib", new Uint8Array(5000)), LIBRARIES, [])).rejects.toThrow(
      "y.grib holds no whole GRIB message",
    );
  });

  test("much damage is told in one line", async () => {
    const word = new TextEncoder().encode("GRIBGRIB");
    const bytes = joined(...Array.from({ length: 100 }, () => word), new Uint8Array(20), GOOD);
    const { notes } = (await openGrib(memorySource("m.grib", bytes), LIBRARIES, [])).contents;
    expect(notes.length).toBe(21);
    expect(notes.at(-1)).toBe("m.grib: 200 messages in all are damaged and skipped.");
  });

  const corrupted = dataFile("era5_corrupted_second_msg.grib");
  test.skipIf(!existsSync(corrupted))(
    "a real file with a damaged message: the rest is read, the loss is told",
    async () => {
      const { contents } = await openGrib(memorySource("era5.grib", readFileSync(corrupted)), LIBRARIES, []);
      expect(contents.fields.map(({ variable, levels }) => [variable, ...(levels ?? [])])).toEqual([
        ["air_temperature", 850],
      ]);
      expect(contents.notes).toEqual([expect.stringMatching(/the message at byte 0 is damaged .* and is skipped/)]);
    },
  );

  test("a damaged message that only its numbers show says where it is when it is read", async () => {
    const bytes = smallFile("ccsds_noise_12_32").bytes.slice();
    bytes.fill(0, 210, bytes.length - 4);
    const file = await openGrib(memorySource("n.grib", joined(OTHER, bytes)), LIBRARIES, []);
    const key = file.contents.fields[1]?.key ?? "";
    await expect(file.read(key, { times: [0, 1] })).rejects.toThrow(
      new RegExp(`n\\.grib: the message at byte ${OTHER.length} cannot be read: its CCSDS data are damaged`),
    );
  });
});

describe.each([
  ["ecmwf_z500_spectral.grib", "geopotential", /spectral coefficients \(spherical harmonic\).*transform it/],
  ["ecmwf_10u_reduced_gg.grib", "parameter_128_165_centre_98", /its grid is reduced Gaussian.*regrid it/],
])("%s", (name, variable, words) => {
  test.skipIf(!existsSync(dataFile(name)))("is refused by name, with what to do", async () => {
    const { contents } = await openGrib(memorySource(name, readFileSync(dataFile(name))), LIBRARIES, []);
    expect(contents.fields).toEqual([]);
    expect(contents.leftOut).toEqual([{ file: name, variable, why: expect.stringMatching(words) }]);
  });
});

describe("the index", () => {
  test("is plain data that opens the file again without a look at its headers", async () => {
    const { bytes } = smallFile("analyses_and_starts");
    const index = await scannedIndex(memorySource("a.grib", bytes));
    const kept = JSON.parse(JSON.stringify(index)) as GribIndex;
    expect(kept).toEqual(index);
    const { counts, source } = counted(memorySource("a.grib", bytes));
    const again = await openGrib(source, LIBRARIES, [], { index: kept });
    expect(counts.reads).toBe(0);
    const fresh = await openGrib(memorySource("a.grib", bytes), LIBRARIES, []);
    expect(again.contents).toEqual(fresh.contents);
    const key = fresh.contents.fields[1]?.key ?? "";
    expect(await again.read(key, { times: [0, 2] })).toEqual(await fresh.read(key, { times: [0, 2] }));
  });

  test("of another size is made anew", async () => {
    const index = await scannedIndex(memorySource("a.grib", smallFile("gap").bytes));
    const file = await openSmall("twice", [], { index });
    expect(file.contents.fields.length).toBe(1);
    expect(file.contents.bytes).toBe(smallFile("twice").bytes.length);
  });

  test("of ten thousand messages over 2 GB takes one small read each", async () => {
    // The same message of 200 kB again and again, never laid out in memory: its numbers fill the space before 7777.
    const head = smallFile("simple2_12").bytes;
    const length = 200_000;
    const number = 10_000;
    const message = new Uint8Array(length);
    message.set(head.subarray(0, head.length - 4));
    new DataView(message.buffer).setUint32(12, length);
    // Section 7 is the last; sections say their length first.
    let at = 16;
    while (message[at + 4] !== 7) at += new DataView(message.buffer).getUint32(at);
    new DataView(message.buffer).setUint32(at, length - 4 - at);
    message.set([0x37, 0x37, 0x37, 0x37], length - 4);
    const readNow = (offset: number, some: number): Uint8Array<ArrayBuffer> => {
      const bytes = new Uint8Array(some);
      for (let done = 0; done < some; ) {
        const from = (offset + done) % length;
        const piece = message.subarray(from, Math.min(length, from + some - done));
        bytes.set(piece, done);
        done += piece.length;
      }
      return bytes;
    };
    const { counts, source } = counted({
      name: "big",
      size: length * number,
      readNow,
      read: async (o, n) => readNow(o, n),
    });
    const shares: number[] = [];
    const index = await scannedIndex(source, { progress: (done) => shares.push(done) });
    expect(index.notes).toEqual([]);
    expect(index.messages).toBe(number);
    expect(index.entries.length).toBe(number);
    expect(index.grids.length).toBe(1);
    expect(counts.reads).toBeLessThanOrEqual(number + 10);
    expect(counts.bytes).toBeLessThanOrEqual(number * 4096 + 200_000);
    expect(shares.at(-1)).toBe(1);
    expect(shares.every((share, i) => i === 0 || share >= (shares[i - 1] as number))).toBe(true);
  });

  test("of small messages reads several at once", async () => {
    const many = joined(...Array.from({ length: 400 }, () => GOOD));
    const { counts, source } = counted(memorySource("s.grib", many));
    const index = await scannedIndex(source);
    expect(index.messages).toBe(400);
    // 96 kB in pieces of 64 kB, and the small one at the beginning.
    expect(counts.reads).toBeLessThanOrEqual(5);
  });

  test("can be cancelled", async () => {
    await expect(openSmall("twice", [], { signal: { aborted: true } })).rejects.toMatchObject({ name: "Cancelled" });
  });
});

test("rows read chunk by chunk decode a message once", async () => {
  const { counts, source } = counted(memorySource("gap", smallFile("gap").bytes));
  const file = await openGrib(source, LIBRARIES, []);
  const key = "gap/geopotential_height";
  counts.reads = 0;
  for (let row = 0; row < 5; row++) await file.read(key, { times: [0, 2], levels: [1], rows: [row, row + 1] });
  // Two messages; packing and data are read apart.
  expect(counts.reads).toBe(4);
  await file.close();
  await file.read(key, { times: [0, 1], levels: [1] });
  expect(counts.reads).toBe(6);
});
