import { mkdir, mkdtemp, readdir, readFile, rm, writeFile } from "node:fs/promises";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { afterEach, beforeEach, expect, test } from "vitest";
import { CaseStore, stateFolder } from "../../../app/shell/case-store.ts";
import type { Shell } from "../../../app/shell/contract.ts";
import { FileRegistry } from "../../../app/shell/file-registry.ts";
import { KnownPlaces } from "../../../app/shell/known-places.ts";
import { answerShellCall, createShell } from "../../../app/shell/shell.ts";

let folder: string;
beforeEach(async () => {
  folder = await mkdtemp(join(tmpdir(), "isohypse-shell-"));
  await mkdir(join(folder, "sample"));
  await writeFile(join(folder, "sample/invented-winter.nc"), "CDF");
  await writeFile(join(folder, "mine.nc"), "CDF");
});
afterEach(() => rm(folder, { recursive: true }));

function shellWith(named: string[], dialog: (() => Promise<string[]>) | null = null): Shell {
  const state = join(folder, "state");
  return createShell({
    kind: "local",
    version: "9.9.9",
    named,
    sampleFolder: join(folder, "sample"),
    registry: new FileRegistry("/files/"),
    store: new CaseStore(state),
    places: new KnownPlaces(state),
    dialog,
  });
}

test("without a file the sample opens, and has no place to be found by", async () => {
  const launch = await shellWith([]).launch();
  expect(launch.sample).toBe(true);
  expect(launch.files).toMatchObject([{ name: "invented-winter.nc", size: 3, place: null }]);
  expect(launch.autosave).toBeNull();
});

test("named files open; a missing one is said", async () => {
  const launch = await shellWith([join(folder, "mine.nc"), join(folder, "no.nc")]).launch();
  expect(launch.sample).toBe(false);
  expect(launch.files).toMatchObject([{ name: "mine.nc", place: join(folder, "mine.nc") }]);
  expect(launch.missing).toEqual([`${join(folder, "no.nc")}: no such file, or it cannot be read.`]);
});

test("a place is found again after a restart, but only one that was opened here", async () => {
  await shellWith([join(folder, "mine.nc")]).launch();
  await writeFile(join(folder, "other.nc"), "CDF");
  const later = shellWith([]);
  expect(await later.filesAt([join(folder, "mine.nc"), join(folder, "other.nc")])).toMatchObject([{ name: "mine.nc" }]);
});

test("a damaged list of places is an empty one", async () => {
  await mkdir(join(folder, "state"));
  await writeFile(join(folder, "state/places.json"), "{");
  expect(await shellWith([]).filesAt([join(folder, "mine.nc")])).toEqual([]);
});

test("the dialog's files are admitted; without a dialog the window is told so", async () => {
  expect(await shellWith([]).chooseFiles()).toBeNull();
  const files = await shellWith([], async () => [join(folder, "mine.nc")]).chooseFiles();
  expect(files).toMatchObject([{ name: "mine.nc" }]);
});

test("the autosave is replaced whole, in the order asked, and nothing else is left", async () => {
  const store = new CaseStore(join(folder, "state"));
  await Promise.all(Array.from({ length: 20 }, (_, i) => store.write(`${i}`.repeat(1000))));
  expect(await store.read()).toBe("19".repeat(1000));
  expect(await readdir(join(folder, "state"))).toEqual(["autosave.json"]);
});

test("an autosave that cannot be written says so and leaves the old one", async () => {
  const store = new CaseStore(join(folder, "state"));
  await store.write("old");
  await expect(store.write("x".repeat(17 * 1024 * 1024))).rejects.toThrow("over 16 MB");
  expect(await readFile(store.path, "utf8")).toBe("old");
  await writeFile(join(folder, "file"), "");
  await expect(new CaseStore(join(folder, "file")).write("x")).rejects.toThrow();
});

test("state lies where each system keeps it", () => {
  expect(stateFolder({ ISOHYPSE_STATE: "/s", HOME: "/h" }, "linux")).toBe("/s");
  expect(stateFolder({ XDG_STATE_HOME: "/x", HOME: "/h" }, "linux")).toBe("/x/isohypse");
  expect(stateFolder({ HOME: "/h" }, "linux")).toBe("/h/.local/state/isohypse");
  expect(stateFolder({ HOME: "/h" }, "darwin")).toBe("/h/Library/Application Support/Isohypse");
  expect(stateFolder({ LOCALAPPDATA: "/l", HOME: "/h" }, "win32")).toBe(join("/l", "Isohypse"));
});

test.each([
  ["an unknown call", "remove", [], "no call named"],
  ["a prototype's name", "toString", [], "no call named"],
  ["autosave of no text", "autosave", [3], "takes one text"],
  ["filesAt of no list", "filesAt", ["/etc"], "one list of paths"],
  ["filesAt of numbers", "filesAt", [[1]], "one list of paths"],
  ["launch with arguments", "launch", [1], "no arguments"],
])("%s is refused", async (_words, call, args, words) => {
  await expect(answerShellCall(shellWith([]), call, args)).rejects.toThrow(words);
});
