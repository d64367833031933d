import { mkdtempSync, readdirSync, readFileSync, rmSync, writeFileSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { afterEach, beforeEach, describe, expect, test } from "vitest";
import { batchTask } from "../../../app/batch/arguments.ts";
import { diagnosticHelp, generalHelp } from "../../../app/batch/help-text.ts";
import { inputRecord } from "../../../app/batch/input-hash.ts";
import { ProgressLine } from "../../../app/batch/progress-line.ts";
import { wholeFiles } from "../../../app/batch/whole-files.ts";
import { CATALOGUE } from "../../../core/recipe/catalogue.ts";
import { EVERY_OPTION, rowSums } from "../../core/recipe/fakes.ts";

let folder = "";
beforeEach(() => {
  folder = mkdtempSync(join(tmpdir(), "isohypse-pieces-"));
});
afterEach(() => rmSync(folder, { recursive: true, force: true }));

describe("batchTask", () => {
  test.each([
    [
      ["r.json", "a.nc", "b.nc", "--out", "o"],
      { kind: "run", recipe: "r.json", files: ["a.nc", "b.nc"], out: "o", workers: null, hash: true },
    ],
    [
      ["--out=o", "--workers", "3", "--no-hash", "r.json", "a.nc"],
      { kind: "run", recipe: "r.json", files: ["a.nc"], out: "o", workers: 3, hash: false },
    ],
    [["--list", "a.nc", "--json"], { kind: "list", files: ["a.nc"], json: true }],
    [["--help"], { kind: "help", about: null }],
    [["-h", "zonal-waves"], { kind: "help", about: "zonal-waves" }],
    [["--schema"], { kind: "schema" }],
  ])("%j", (argv, task) => {
    expect(batchTask(argv)).toEqual(task);
  });

  test.each([
    [[], "A RECIPE.json and at least one FILE are wanted"],
    [["r.json", "--out", "o"], "At least one FILE is wanted"],
    [["r.json", "a.nc"], "--out FOLDER is wanted"],
    [["r.json", "a.nc", "--out"], "--out"],
    [["--list"], "--list wants at least one FILE"],
    [["--frobnicate"], "--frobnicate"],
    [["--help", "a", "b"], "one diagnostic, or none"],
    [["r.json", "a.nc", "--out", "o", "--workers", "0"], "--workers 0 is not a whole number from 1 to 64"],
    [["r.json", "a.nc", "--out", "o", "--workers", "two"], "--workers two is not"],
    [["r.json", "a.nc", "--out", "o", "--json"], "--json belongs to --list"],
  ])("refuses %j", (argv, words) => {
    expect(() => batchTask(argv)).toThrow(words);
  });
});

describe("wholeFiles", () => {
  test("all files appear under their names, over older ones", async () => {
    writeFileSync(join(folder, "a"), "old and longer");
    const written = await wholeFiles(async (files) => {
      await files.write(join(folder, "a"), async (file) => file.writeFile("new"));
      await files.write(join(folder, "b"), async (file) => file.writeFile("second"));
      expect(readFileSync(join(folder, "a"), "utf8")).toBe("old and longer");
    });
    expect(written).toEqual([join(folder, "a"), join(folder, "b")]);
    expect(readFileSync(join(folder, "a"), "utf8")).toBe("new");
    expect(readdirSync(folder).sort()).toEqual(["a", "b"]);
  });

  test("a failure leaves what was there before, and nothing half-written", async () => {
    writeFileSync(join(folder, "a"), "old");
    const writing = wholeFiles(async (files) => {
      await files.write(join(folder, "a"), async (file) => file.writeFile("new"));
      await files.write(join(folder, "b"), async (file) => {
        await file.writeFile("half");
        throw new Error("the disk is full");
      });
    });
    await expect(writing).rejects.toThrow("the disk is full");
    expect(readdirSync(folder)).toEqual(["a"]);
    expect(readFileSync(join(folder, "a"), "utf8")).toBe("old");
  });
});

describe("inputRecord", () => {
  // NIST, FIPS 180-4 example: SHA-256 of "abc".
  const ABC = "ba7816bf8f01cfea414140de5dae2223b00361a396177a9cb410ff61f20015ad";

  test("size, time of change, SHA-256", async () => {
    const path = join(folder, "a");
    writeFileSync(path, "abc");
    expect(await inputRecord(path, true, new AbortController().signal)).toEqual({
      file: path,
      bytes: 3,
      modified: expect.stringMatching(/^\d{4}-\d\d-\d\dT/),
      sha256: ABC,
    });
    expect((await inputRecord(path, false, new AbortController().signal)).sha256).toBeNull();
    expect((await inputRecord(path, true, AbortSignal.abort())).sha256).toBeNull();
  });
});

describe("help", () => {
  test("names every diagnostic of the catalogue", () => {
    const text = generalHelp(CATALOGUE);
    for (const { id } of CATALOGUE) expect(text).toContain(id);
    for (const line of text.split("\n")) expect(line.length).toBeLessThanOrEqual(100);
  });

  test("a diagnostic's help says every option with bounds and default, every output with units, sources, validity", () => {
    const text = diagnosticHelp(rowSums);
    for (const { name, about } of EVERY_OPTION) {
      expect(text).toContain(`"${name}"`);
      expect(text).toContain(about);
    }
    expect(text).toContain('"factor": number from -10 to 10; default 1');
    expect(text).toContain('"waves": [low, high], whole numbers from 1 to 720; default [1,6]');
    expect(text).toContain('"band": [low, high], numbers from -90 to 90 °N; default none');
    expect(text).toContain('"mean": "coherent" | "incoherent"; default "coherent"');
    expect(text).toContain("sum (time, latitude), units of the field");
    expect(text).toContain("Nobody 1900");
    expect(text).toContain("Everywhere.");
    for (const diagnostic of CATALOGUE)
      for (const { name } of diagnostic.options) expect(diagnosticHelp(diagnostic)).toContain(`"${name}"`);
  });
});

describe("ProgressLine", () => {
  test("writes over itself, at most ten times a second, and clears away", () => {
    let now = 0;
    let text = "";
    const line = new ProgressLine(
      (more) => (text += more),
      () => now,
    );
    line.clear();
    expect(text).toBe("");
    line.show({ title: "waves", done: 0.25, secondsLeft: 61 });
    line.show({ title: "waves", done: 0.26, secondsLeft: 60 });
    now = 200;
    line.show({ title: "waves", done: 0.5, secondsLeft: null });
    line.clear();
    expect(text).toBe("\rwaves: 25 %, 1 min left\u001b[K\rwaves: 50 %\u001b[K\r\u001b[K");
  });
});
