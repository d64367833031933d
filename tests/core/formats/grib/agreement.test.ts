import { existsSync, readFileSync } from "node:fs";
import { expect, test } from "vitest";
import { LIBRARIES } from "../../../../app/codecs/libraries.ts";
import { decodedMessage } from "../../../../core/formats/grib/decode-message.ts";
import { scannedIndex } from "../../../../core/formats/grib/scan.ts";
import { memorySource } from "../../../../core/formats/memory-source.ts";
import { dataFile } from "../data-folder.ts";

/** Every message of a file, decoded, whether or not its level is one that is opened. */
async function decoded(name: string): Promise<Float64Array[]> {
  const source = memorySource(name, Uint8Array.from(readFileSync(dataFile(name))));
  const { entries, grids } = await scannedIndex(source);
  const values: Float64Array[] = [];
  for (const entry of entries) {
    const grid = grids[entry.grid];
    if (grid === undefined) throw new Error(`${name} has a message on no grid`);
    values.push(await decodedMessage(source, entry, grid.ni * grid.nj, LIBRARIES));
  }
  return values;
}

// The files come in several packings of the same numbers, as their README says; complex packing keeps all of simple packing's bits.
test.each([
  [["gfs_1deg_10m_uv_template5_0.grib2", "gfs_1deg_10m_uv_template5_2.grib2", "gfs_1deg_10m_uv_template5_3.grib2"], 2],
  [["gfs_0p25_z500_jpeg2000.grib2", "gfs_0p25_z500_png.grib2"], 1],
])("%j hold the very same numbers", async (names, fields) => {
  if (!names.every((name) => existsSync(dataFile(name))))
    return console.info(`${names.join(", ")}: not there, not compared`);
  const [first, ...others] = await Promise.all(names.map(decoded));
  expect(first).toHaveLength(fields);
  for (const other of others)
    first?.forEach((values, i) => {
      expect(values.length).toBeGreaterThan(60_000);
      expect(Buffer.from((other[i] as Float64Array).buffer).equals(Buffer.from(values.buffer))).toBe(true);
    });
});
