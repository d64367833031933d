import { createWriteStream } from "node:fs";
import { writeFile } from "node:fs/promises";
import { join, resolve } from "node:path";
import { classicFile } from "../core/formats/netcdf/write.ts";
import { invention } from "./model/invention.ts";
import { sampleFile } from "./model/sample-file.ts";

// Built to out/tools/sample/make.js, three folders below the project.
const folder = join(resolve(import.meta.dirname, "../../.."), "sample-data");
const { days, planted } = invention(60);
const stream = createWriteStream(join(folder, "invented-winter.nc"));
for (const piece of classicFile(sampleFile(days))) stream.write(piece);
await new Promise<void>((done, failed) => {
  stream.on("error", failed);
  stream.end(done);
});
await writeFile(join(folder, "invented-winter.json"), `${JSON.stringify(planted, null, 2)}\n`);
console.log("sample-data/invented-winter.nc is made anew.");
