import { mkdtempSync, readdirSync, readFileSync, rmSync, utimesSync, writeFileSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { afterEach, beforeEach, expect, test } from "vitest";
import { cacheFolder, IndexFolder } from "../../../app/batch/index-folder.ts";
import { LIBRARIES } from "../../../app/codecs/libraries.ts";
import type { ByteSource } from "../../../core/formats/byte-source.ts";
import { keptIndex } from "../../../core/formats/grib/grib-index.ts";
import { memorySource } from "../../../core/formats/memory-source.ts";
import { openFile } from "../../../core/formats/open-file.ts";

let folder = "";
beforeEach(() => {
  folder = mkdtempSync(join(tmpdir(), "isohypse-index-"));
});
afterEach(() => rmSync(folder, { recursive: true, force: true }));

const small = JSON.parse(
  readFileSync(new URL("../../core/formats/grib/reference/small.json", import.meta.url), "utf8"),
) as Record<string, { file: string }> | { files: Record<string, string> };

/** Some GRIB file among the tests' own. */
function gribBytes(): Uint8Array {
  const found = JSON.stringify(small).match(/"(R1JJQ[A-Za-z0-9+/=]+)"/);
  if (found === null) throw new Error("no GRIB file in small.json");
  return Uint8Array.from(Buffer.from(found[1] as string, "base64"));
}

function counted(bytes: Uint8Array, modified: number): ByteSource & { reads: number } {
  const plain = memorySource("a.grib", bytes);
  const source = {
    ...plain,
    modified,
    reads: 0,
    read(offset: number, length: number) {
      source.reads += 1;
      return plain.read(offset, length);
    },
  };
  return source;
}

test("a scan is kept and found again while name, size and time of change are the same", async () => {
  const keeper = new IndexFolder(folder, 0);
  const bytes = gribBytes();
  const first = await openFile(counted(bytes, 1), LIBRARIES, [], { keeper });
  expect(readdirSync(folder)).toHaveLength(1);
  const again = counted(bytes, 1);
  const second = await openFile(again, LIBRARIES, [], { keeper });
  expect(again.reads).toBe(1); // the first bytes, which say that it is GRIB
  expect(second.contents).toEqual(first.contents);
  await openFile(counted(bytes, 2), LIBRARIES, [], { keeper });
  expect(readdirSync(folder)).toHaveLength(2);
});

test("what is no index, or of another file, is scanned anew", async () => {
  const keeper = new IndexFolder(folder, 0);
  const bytes = gribBytes();
  const { contents } = await openFile(counted(bytes, 1), LIBRARIES, [], { keeper });
  const [name = ""] = readdirSync(folder);
  for (const text of [
    "",
    "{",
    "null",
    "[]",
    '{"version":1,"size":7,"grids":[],"entries":[],"notes":[],"messages":0}',
  ]) {
    writeFileSync(join(folder, name), text);
    expect((await openFile(counted(bytes, 1), LIBRARIES, [], { keeper })).contents).toEqual(contents);
  }
  expect(keptIndex({ version: 2, size: 3 }, { size: 3 })).toBeNull();
});

test("small files are not worth it, a folder that cannot be is no failure, and the oldest go", async () => {
  const bytes = gribBytes();
  await openFile(counted(bytes, 1), LIBRARIES, [], { keeper: new IndexFolder(folder) });
  expect(readdirSync(folder)).toEqual([]);
  writeFileSync(join(folder, "file"), "");
  await openFile(counted(bytes, 1), LIBRARIES, [], { keeper: new IndexFolder(join(folder, "file", "no"), 0) });
  for (let i = 0; i < 70; i++) {
    const path = join(folder, `index-${i.toString(16).padStart(32, "0")}.json`);
    writeFileSync(path, "{}");
    utimesSync(path, i + 1, i + 1);
  }
  await openFile(counted(bytes, 1), LIBRARIES, [], { keeper: new IndexFolder(folder, 0) });
  const kept = readdirSync(folder).filter((name) => name.startsWith("index-"));
  expect(kept).toHaveLength(64);
  expect(kept).not.toContain(`index-${"0".padStart(32, "0")}.json`);
});

test("the folder is the system's own for such things, or the one that is named", () => {
  expect(cacheFolder({ ISOHYPSE_CACHE: "/c" }, "linux")).toBe("/c");
  expect(cacheFolder({ XDG_CACHE_HOME: "/x" }, "linux")).toBe(join("/x", "isohypse"));
  expect(cacheFolder({ HOME: "/h" }, "linux")).toBe(join("/h", ".cache", "isohypse"));
  expect(cacheFolder({ HOME: "/h" }, "darwin")).toBe(join("/h", "Library", "Caches", "Isohypse"));
  expect(cacheFolder({ LOCALAPPDATA: "L" }, "win32")).toBe(join("L", "Isohypse", "Cache"));
});
