import { mkdtempSync, readFileSync, rmSync, writeFileSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { fileURLToPath } from "node:url";
import { Worker } from "node:worker_threads";
import { build } from "vite";
import { afterAll, beforeAll, expect, test } from "vitest";
import { mutated, seeded } from "../mutations.ts";
import type { Reading } from "./reading-worker.ts";

const CASES = 3000;
const MOST_MS = 1500; // a case takes some 10 ms; the window allows 5 s
const MOST_GROWTH = 512; // MB
/** The library is known to spin on some damaged files; then the worker is ended and replaced, as the window does it. */
const MOST_ENDLESS = CASES / 100;

let folder = "";
beforeAll(async () => {
  folder = mkdtempSync(join(tmpdir(), "isohypse-hdf5-"));
  await build({
    configFile: false,
    logLevel: "error",
    ssr: { noExternal: true },
    build: {
      ssr: true,
      target: "node20",
      outDir: folder,
      emptyOutDir: true,
      rollupOptions: {
        input: { worker: fileURLToPath(new URL("reading-worker.ts", import.meta.url)) },
        output: { format: "es", entryFileNames: "[name].js" },
      },
    },
  });
  writeFileSync(join(folder, "package.json"), '{ "type": "module" }');
}, 60_000);
afterAll(() => rmSync(folder, { recursive: true, force: true }));

/** A reader in a thread of its own, replaced when it does not answer in time or dies. */
class Reader {
  #worker: Worker | null = null;
  #settle: (reading: Reading | null) => void = () => undefined;

  #asked(bytes: Uint8Array, within: number): Promise<Reading | null> {
    return new Promise((resolve) => {
      const late = setTimeout(() => this.#settle(null), within);
      this.#settle = (reading) => {
        clearTimeout(late);
        resolve(reading);
      };
      this.#worker?.postMessage(bytes);
    });
  }

  /** null: it had to be ended. */
  async read(bytes: Uint8Array): Promise<Reading | null> {
    if (this.#worker === null) {
      this.#worker = new Worker(join(folder, "worker.js"));
      this.#worker.on("message", (reading: Reading) => this.#settle(reading));
      this.#worker.on("error", () => this.#settle(null));
      // The library is loaded with the first file: that may take longer than a file.
      await this.#asked(bases[1] as Uint8Array, 60_000);
    }
    const found = await this.#asked(bytes, MOST_MS);
    if (found === null) await this.end();
    return found;
  }

  async end(): Promise<void> {
    const worker = this.#worker;
    this.#worker = null;
    await worker?.terminate();
  }
}

const bases = ["types.nc", "packed.nc", "groups.nc", "plain.h5", "field_nc4_deflate.nc"].map((name) =>
  Uint8Array.from(readFileSync(new URL(`reference/${name}`, import.meta.url))),
);

test(`${CASES} damaged HDF5 files give words or numbers; a good file is read right all along`, {
  timeout: 300_000,
}, async () => {
  const random = seeded(20_261_202);
  const reader = new Reader();
  const counts = { refused: 0, opened: 0, read: 0, endless: 0 };
  const good = await reader.read(bases[1] as Uint8Array);
  expect(good?.numbers.deflate?.slice(0, 4)).toEqual([0, 1, 2, 3]);
  let most = 0;
  for (let i = 0; i < CASES; i++) {
    const found = await reader.read(mutated(bases[i % bases.length] as Uint8Array, random, "anywhere"));
    if (found === null) counts.endless += 1;
    else {
      counts[Object.keys(found.numbers).length > 0 ? "read" : found.opened ? "opened" : "refused"] += 1;
      for (const { name, message } of found.errors) {
        expect(["FormatError", "ShapeError", "MetadataError"], `case ${i}: ${name}: ${message}`).toContain(name);
        expect(message, `case ${i}`).toMatch(/^mutated\.nc.{15,}/s);
      }
      most = Math.max(most, found.megabytes);
    }
    if (i % 100 === 99) {
      const again = await reader.read(bases[1] as Uint8Array);
      expect(again?.numbers, `after case ${i}`).toEqual(good?.numbers);
      expect(again?.errors).toEqual([]);
    }
  }
  await reader.end();
  console.info(`${JSON.stringify(counts)}, growth ${(most - (good?.megabytes ?? 0)).toFixed(0)} MB`);
  expect(counts.endless).toBeLessThan(MOST_ENDLESS);
  expect(most - (good?.megabytes ?? 0)).toBeLessThan(MOST_GROWTH);
  for (const kind of ["refused", "read"] as const) expect(counts[kind]).toBeGreaterThan(CASES / 100);
});
