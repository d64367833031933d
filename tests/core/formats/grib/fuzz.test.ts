import { existsSync, openSync, readSync } from "node:fs";
import { expect, test } from "vitest";
import { LIBRARIES } from "../../../../app/codecs/libraries.ts";
import { DataError } from "../../../../core/errors.ts";
import { openGrib } from "../../../../core/formats/grib/open-grib.ts";
import { memorySource } from "../../../../core/formats/memory-source.ts";
import { dataFile } from "../data-folder.ts";
import { SMALL_FILES } from "./small-files.ts";

const CASES = 3000;
const MOST_MS = 5000; // a case takes some milliseconds; this is for a machine that is busy
const MOST_GROWTH = 768 * 2 ** 20; // one field of the largest grid that is accepted takes 320 MB, and the next comes before the first is gone

/** Seeded numbers in [0, 1): mulberry32 (T. Ettinger, public domain). */
function seeded(seed: number): () => number {
  let state = seed;
  return () => {
    state = (state + 0x6d2b79f5) | 0;
    let t = Math.imul(state ^ (state >>> 15), 1 | state);
    t = (t + Math.imul(t ^ (t >>> 7), 61 | t)) ^ t;
    return ((t ^ (t >>> 14)) >>> 0) / 2 ** 32;
  };
}

function firstBytes(path: string, length: number): Uint8Array {
  const bytes = Buffer.alloc(length);
  return Uint8Array.from(bytes.subarray(0, readSync(openSync(path, "r"), bytes, 0, length, 0)));
}

const bases: readonly Uint8Array[] = [
  ...SMALL_FILES.map(({ bytes }) => bytes),
  ...["era5_corrupted_second_msg.grib", "gfs_2p5_20110110T12_f120.grib2", "ecmwf_t_hpa_and_pa_allmissing.grib2"]
    .map(dataFile)
    .filter((path) => existsSync(path))
    .map((path) => firstBytes(path, 40_000)),
];

/** Values that break counts, lengths and widths. */
const WORDS = [0xffffffff, 0x80000000, 0x7fffffff, 0x00ffffff, 0x01000000, 1_000_000, 65_535, 255, 33, 0, 1, 2];

function mutated(base: Uint8Array, random: () => number): Uint8Array {
  const bytes = base.slice();
  const upTo = (n: number) => Math.floor(random() * n);
  const changes = 1 + upTo(4);
  for (let i = 0; i < changes; i++) {
    // Most changes hit the headers of the first message; some anything.
    const within = random() < 0.8 ? Math.min(bytes.length, 260) : bytes.length;
    const at = 4 + upTo(within - 8);
    const kind = random();
    if (kind < 0.35) new DataView(bytes.buffer).setUint32(at, WORDS[upTo(WORDS.length)] as number);
    else if (kind < 0.9) bytes[at] = upTo(256);
    else bytes.copyWithin(at, upTo(bytes.length), at + upTo(64));
  }
  return random() < 0.15 ? bytes.slice(0, upTo(bytes.length)) : bytes;
}

function expectWords(error: unknown): void {
  if (!(error instanceof DataError)) throw error;
  expect(error.message.length).toBeGreaterThan(20);
  expect(error.message).not.toMatch(/undefined|\[object/);
}

/** Open it and read the first step and level of every field. */
async function outcome(bytes: Uint8Array): Promise<"refused" | "opened" | "read"> {
  let found: "refused" | "opened" | "read" = "refused";
  try {
    const file = await openGrib(memorySource("mutated.grib", bytes), LIBRARIES, []);
    found = "opened";
    for (const { why } of file.contents.leftOut) expect(why).not.toMatch(/undefined|\[object/);
    for (const { key, grid } of file.contents.fields) {
      expect(grid.lat.every((lat) => Math.abs(lat) < 90.001)).toBe(true);
      try {
        await file.read(key, { times: [0, 1], levels: [0], rows: [0, 1] });
        found = "read";
      } catch (error) {
        expectWords(error);
      }
    }
    await file.close();
  } catch (error) {
    expectWords(error);
  }
  return found;
}

test(`${CASES} damaged files give an answer or words, in bounded time and memory`, { timeout: 240_000 }, async () => {
  const random = seeded(20_261_201);
  // The images' decoders hold on to memory of their own: they are there before the count begins.
  for (const base of bases) await outcome(base);
  const before = process.memoryUsage().rss;
  const counts = { refused: 0, opened: 0, read: 0 };
  let most = before;
  let slowest = 0;
  for (let i = 0; i < CASES; i++) {
    const bytes = mutated(bases[i % bases.length] as Uint8Array, random);
    const start = performance.now();
    try {
      counts[await outcome(bytes)] += 1;
    } catch (error) {
      throw new Error(`case ${i} of base ${i % bases.length}: ${error}`, { cause: error });
    }
    const took = performance.now() - start;
    slowest = Math.max(slowest, took);
    expect(took, `case ${i}: ${took} ms, limit ${MOST_MS}`).toBeLessThan(MOST_MS);
    most = Math.max(most, process.memoryUsage().rss);
  }
  const growth = most - before;
  console.info(
    `${JSON.stringify(counts)}, slowest ${slowest.toFixed(1)} ms, growth at most ${(growth / 2 ** 20).toFixed(0)} MB`,
  );
  expect(growth, `grew by ${growth} bytes, limit ${MOST_GROWTH}`).toBeLessThan(MOST_GROWTH);
  // All three outcomes must occur, or the changes were too mild or too wild to prove anything.
  for (const count of Object.values(counts)) expect(count).toBeGreaterThan(CASES / 50);
});

test("every way to cut a small file gives an answer or words", { timeout: 60_000 }, async () => {
  for (const base of bases.filter((_, i) => i % 12 === 0).slice(0, 12))
    for (let length = 0; length < Math.min(base.length, 3000); length += 5) await outcome(base.slice(0, length));
});
