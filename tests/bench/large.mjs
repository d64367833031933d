// `npm run bench:large`: files larger than memory, made here and mostly sparse: how long they take to open, what a step takes, and the
// memory. It judges nothing. A netCDF-4 file is made where PYTHON has h5py.
import { spawnSync } from "node:child_process";
import { closeSync, ftruncateSync, mkdtempSync, openSync, rmSync, statSync, writeFileSync, writeSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { fileURLToPath } from "node:url";
import { build } from "vite";

const here = fileURLToPath(new URL(".", import.meta.url));
const python = process.env.PYTHON ?? "python3";
const [ROWS, COLUMNS] = [121, 240]; // 1.5°

/** A 64-bit offset file of 9 GB: times are written, fields are holes but for the last. */
function makeClassic(path) {
  const steps = 77_500;
  const plane = 4 * ROWS * COLUMNS;
  const stride = 8 + plane;
  const parts = [];
  const u32 = (value) => {
    const bytes = Buffer.alloc(4);
    bytes.writeUInt32BE(value >>> 0);
    parts.push(bytes);
  };
  const u64 = (value) => {
    const bytes = Buffer.alloc(8);
    bytes.writeBigUInt64BE(BigInt(value));
    parts.push(bytes);
  };
  const text = (words) => {
    u32(words.length);
    parts.push(Buffer.from(words.padEnd(Math.ceil(words.length / 4) * 4, "\0")));
  };
  const header = (begins) => {
    parts.length = 0;
    parts.push(Buffer.from([0x43, 0x44, 0x46, 2]));
    u32(steps);
    u32(10);
    u32(3);
    for (const [name, length] of [
      ["time", 0],
      ["lat", ROWS],
      ["lon", COLUMNS],
    ]) {
      text(name);
      u32(length);
    }
    u32(0);
    u32(0);
    u32(11);
    u32(4);
    const variables = [
      ["lat", [1], { units: "degrees_north" }, 6, 8 * ROWS],
      ["lon", [2], { units: "degrees_east" }, 6, 8 * COLUMNS],
      ["time", [0], { units: "hours since 1900-01-01" }, 6, 8],
      ["z", [0, 1, 2], { units: "gpm", standard_name: "geopotential_height" }, 5, plane],
    ];
    variables.forEach(([name, dims, attributes, type, size], i) => {
      text(name);
      u32(dims.length);
      for (const dim of dims) u32(dim);
      u32(12);
      u32(Object.keys(attributes).length);
      for (const [key, value] of Object.entries(attributes)) {
        text(key);
        u32(2);
        text(value);
      }
      u32(type);
      u32(size);
      u64(begins[i]);
    });
    return Buffer.concat(parts);
  };
  const length = header([0, 0, 0, 0]).length;
  const begins = [length, length + 8 * ROWS, length + 8 * (ROWS + COLUMNS), length + 8 * (ROWS + COLUMNS) + 8];
  const doubles = (values) => {
    const bytes = Buffer.alloc(8 * values.length);
    values.forEach((value, i) => {
      bytes.writeDoubleBE(value, 8 * i);
    });
    return bytes;
  };
  const file = openSync(path, "w");
  const put = (bytes, at) => writeSync(file, bytes, 0, bytes.length, at);
  put(header(begins), 0);
  put(doubles(Array.from({ length: ROWS }, (_, j) => 90 - 1.5 * j)), begins[0]);
  put(doubles(Array.from({ length: COLUMNS }, (_, i) => 1.5 * i)), begins[1]);
  for (let t = 0; t < steps; t++) put(doubles([6 * t]), begins[2] + t * stride);
  ftruncateSync(file, begins[2] + steps * stride);
  closeSync(file);
}

/** A GRIB 1 file of 2 GB: six-hourly analyses of one level at 16 bits, headers written, numbers holes (all of the reference value). */
function makeGrib(path) {
  const data = 11 + 2 * ROWS * COLUMNS + 1;
  const length = 8 + 28 + 32 + data + 4;
  const message = Buffer.alloc(8 + 28 + 32 + 11);
  message.write("GRIB", 0);
  message.writeUIntBE(length, 4, 3);
  message[7] = 1;
  const product = message.subarray(8);
  product.writeUIntBE(28, 0, 3);
  product[3] = 128; // table of ECMWF
  product[4] = 98;
  product[6] = 255;
  product[7] = 0x80;
  product[8] = 129; // geopotential
  product[9] = 100;
  product.writeUInt16BE(500, 10);
  product[17] = 1;
  const grid = message.subarray(36);
  grid.writeUIntBE(32, 0, 3);
  grid[4] = 255;
  grid.writeUInt16BE(COLUMNS, 6);
  grid.writeUInt16BE(ROWS, 8);
  grid.writeUIntBE(90_000, 10, 3);
  grid[16] = 128;
  grid.writeUIntBE(0x800000 | 90_000, 17, 3);
  grid.writeUIntBE(358_500, 20, 3);
  grid.writeUInt16BE(1500, 23);
  grid.writeUInt16BE(1500, 25);
  const section = message.subarray(68);
  section.writeUIntBE(data, 0, 3);
  section[3] = 8;
  section.writeUInt32BE(0x44c35000, 6); // 50000 as an IBM float
  section[10] = 16;
  const file = openSync(path, "w");
  const end = Buffer.from("7777");
  let at = 0;
  for (let n = 0; at < 2e9; n++, at += length) {
    const day = new Date(Date.UTC(1979, 0, 1) + n * 6 * 3600_000);
    product[12] = day.getUTCFullYear() % 100 || 100;
    product[13] = day.getUTCMonth() + 1;
    product[14] = day.getUTCDate();
    product[15] = day.getUTCHours();
    product[24] = Math.ceil(day.getUTCFullYear() / 100);
    writeSync(file, message, 0, message.length, at);
    writeSync(file, end, 0, 4, at + length - 4);
  }
  closeSync(file);
}

const HDF5 = `
import sys, h5py, numpy as np
ny, nx, nt = ${ROWS}, ${COLUMNS}, 52000
with h5py.File(sys.argv[1], "w", libver="earliest") as f:
    how = h5py.h5p.create(h5py.h5p.DATASET_CREATE)
    how.set_layout(h5py.h5d.CONTIGUOUS)
    how.set_alloc_time(h5py.h5d.ALLOC_TIME_EARLY)
    how.set_fill_time(h5py.h5d.FILL_TIME_NEVER)
    h5py.h5d.create(f.id, b"z", h5py.h5t.IEEE_F32LE, h5py.h5s.create_simple((nt, ny, nx)), how)
    f["z"].attrs["units"] = "gpm"
    f["z"].attrs["standard_name"] = "geopotential_height"
    axes = [("time", np.arange(nt) * 0.25, "days since 1979-01-01"), ("lat", np.linspace(90, -90, ny), "degrees_north"), ("lon", np.arange(nx) * 1.5, "degrees_east")]
    for i, (name, values, units) in enumerate(axes):
        f[name] = values
        f[name].attrs["units"] = units
        f[name].make_scale(name)
        f["z"].dims[i].attach_scale(f[name])
`;

const folder = mkdtempSync(join(tmpdir(), "isohypse-large-"));
try {
  await build({
    configFile: false,
    logLevel: "error",
    ssr: { noExternal: true },
    build: {
      ssr: true,
      target: "node20",
      outDir: join(folder, "side"),
      rollupOptions: {
        input: { side: join(here, "large-side.ts") },
        output: { format: "es", entryFileNames: "[name].js" },
      },
    },
  });
  writeFileSync(join(folder, "side/package.json"), '{ "type": "module" }');
  const files = [join(folder, "classic.nc"), join(folder, "grib.grib"), join(folder, "netcdf4.nc")];
  makeClassic(files[0]);
  makeGrib(files[1]);
  const made = spawnSync(python, ["-c", HDF5, files[2]], { encoding: "utf8" });
  if (made.status !== 0) {
    console.log("No netCDF-4 file: PYTHON names no python with h5py.");
    files.pop();
  }
  console.log(
    `${"file".padEnd(14)}${"GB".padStart(6)}${"steps".padStart(8)}   open ms   slowest of 40 steps ms   memory grown MB`,
  );
  for (const path of files) {
    const run = spawnSync(process.execPath, [join(folder, "side/side.js"), path], {
      encoding: "utf8",
      env: { ...process.env, ISOHYPSE_CACHE: join(folder, "cache") },
    });
    if (run.status !== 0) throw new Error(run.stderr);
    for (const line of run.stdout.trim().split("\n")) {
      const { steps, open, slowest, grown } = JSON.parse(line);
      console.log(
        `${path.split(/[\\/]/).pop().padEnd(14)}${(statSync(path).size / 1e9).toFixed(1).padStart(6)}${String(steps).padStart(8)}${open.toFixed(0).padStart(10)}${slowest.toFixed(0).padStart(26)}${grown.toFixed(0).padStart(18)}`,
      );
    }
  }
} catch (error) {
  console.error(error.message);
  process.exitCode = 1;
} finally {
  rmSync(folder, { recursive: true, force: true });
}
