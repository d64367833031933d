import { existsSync, openSync, readSync } from "node:fs";
import { expect, test } from "vitest";
import { LIBRARIES } from "../../../../app/codecs/libraries.ts";
import { DataError } from "../../../../core/errors.ts";
import { memorySource } from "../../../../core/formats/memory-source.ts";
import { openFile } from "../../../../core/formats/open-file.ts";
import { dataFile } from "../data-folder.ts";
import { bytesOf, referenceBytes, smallFile } from "../written.ts";

const CASES = 3000;
const MOST_MS = 2000; // a case takes under 10 ms here; this is for a machine that is busy
const MOST_GROWTH = 256 * 2 ** 20; // what a run may hold on to; the bases are under 1 MB together

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

const bases: Uint8Array[] = [
  bytesOf(smallFile()),
  bytesOf(smallFile({ z: { data: Int16Array.from({ length: 48 }, (_, i) => i) } })),
  ...["types_1", "types_5", "records_1", "records_2", "records_5", "one_short_1", "one_byte_5", "wide_types_5"].map(
    (name) => referenceBytes(`${name}.nc`),
  ),
  ...["field_1", "field_2", "field_5"].map((name) => referenceBytes(`${name}.nc`)),
  ...["eraint_uvz.nc", "sresa1b_ncar_ccsm3-example.nc"]
    .map(dataFile)
    .filter((path) => existsSync(path))
    .map((path) => firstBytes(path, 200_000)),
];

/** Values that break counts, offsets and sizes: all bits set, sign bits, huge, one less, nothing. */
const WORDS = [0xffffffff, 0x80000000, 0x7fffffff, 0x40000000, 0x10000000, 0x00ffffff, 1_000_000, 65_536, 0, 1, 2, 5];

function mutated(base: Uint8Array, random: () => number): Uint8Array {
  const bytes = base.slice();
  const upTo = (n: number) => Math.floor(random() * n);
  const header = Math.min(bytes.length, 4 + upTo(3) * 700 + 500);
  const changes = 1 + upTo(4);
  for (let i = 0; i < changes; i++) {
    const kind = random();
    const word = 4 * upTo(Math.floor(header / 4) - 1);
    if (kind < 0.5) {
      const value = WORDS[upTo(WORDS.length)] as number;
      new DataView(bytes.buffer).setUint32(Math.max(4, word), value);
    } else if (kind < 0.8) bytes[4 + upTo(header - 4)] = upTo(256);
    else if (kind < 0.9) bytes.copyWithin(word, 4 * upTo(Math.floor(header / 4)), header);
    else bytes[upTo(4)] = upTo(6);
  }
  return random() < 0.3 ? bytes.slice(0, upTo(bytes.length)) : bytes;
}

/** Open it and read one step, one level and few rows of every field. */
async function outcome(bytes: Uint8Array): Promise<"refused" | "opened" | "read"> {
  let found: "refused" | "opened" | "read" = "refused";
  try {
    const file = await openFile(memorySource("mutated.nc", bytes), LIBRARIES);
    found = "opened";
    for (const { key, levels } of file.contents.fields) {
      try {
        await file.read(key, { times: [0, 1], ...(levels === null ? {} : { levels: [0] }) });
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

function expectWords(error: unknown): void {
  if (!(error instanceof DataError)) throw error;
  expect(error.message.length).toBeGreaterThan(20);
}

test(`${CASES} damaged files give an answer or words, in bounded time and memory`, { timeout: 120_000 }, async () => {
  const random = seeded(20_261_201);
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

test("every way to cut a small file gives an answer or words", async () => {
  for (const base of bases.slice(0, 3))
    for (let length = 0; length < base.length; length += 7) await outcome(base.slice(0, length));
});
