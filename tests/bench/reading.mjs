// `npm run bench:reading`: how fast files are read whole, beside numpy, h5py and GDAL. Prints nanoseconds a point; it judges
// nothing. PYTHON names a python with numpy, scipy and netCDF4; h5py and GDAL's module are used where they are.
import { spawnSync } from "node:child_process";
import { existsSync, mkdtempSync, rmSync, writeFileSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { fileURLToPath } from "node:url";
import { build } from "vite";

const here = fileURLToPath(new URL(".", import.meta.url));
const python = process.env.PYTHON ?? "python3";
const data = process.env.ISOHYPSE_DATA ?? fileURLToPath(new URL("../../../shared/data", import.meta.url));
const GRIB = [
  "era5_eda_z_t_3deg_10memb.grib",
  "gfs_0p25_z500_complex.grib2",
  "gfs_0p25_z500_jpeg2000.grib2",
  "gfs_0p25_z500_png.grib2",
];

function ran(command, args) {
  const run = spawnSync(command, args, { encoding: "utf8", maxBuffer: 1 << 26 });
  if (run.status !== 0) throw new Error(`${command} ${args.join(" ")} failed:\n${run.stderr}`);
  if (run.stderr) process.stderr.write(run.stderr);
  return run.stdout;
}

const folder = mkdtempSync(join(tmpdir(), "isohypse-reading-"));
try {
  ran(python, [join(here, "reading.py"), "make", folder]);
  await build({
    configFile: false,
    logLevel: "error",
    ssr: { noExternal: true },
    build: {
      ssr: true,
      target: "node20",
      outDir: join(folder, "side"),
      rollupOptions: {
        input: { side: join(here, "reading-side.ts") },
        output: { format: "es", entryFileNames: "[name].js" },
      },
    },
  });
  writeFileSync(join(folder, "side/package.json"), '{ "type": "module" }');
  const gribs = GRIB.map((name) => join(data, name)).filter((path) => existsSync(path));
  if (gribs.length === 0) console.log(`No GRIB file in ${data}; set ISOHYPSE_DATA to a folder that has them.`);
  const files = [join(folder, "classic.nc"), join(folder, "deflate.nc"), ...gribs];
  const ours = JSON.parse(ran(process.execPath, [join(folder, "side/side.js"), ...files]));
  // Libraries may say things of their own before the last line.
  const said = ran(python, [join(here, "reading.py"), "read", folder, ...gribs]).trim();
  const theirs = JSON.parse(said.slice(said.lastIndexOf("\n") + 1));
  console.log(
    `\n${"file".padEnd(34)}${"points".padStart(12)}   ns a point, open and read whole: here, there, their rate / ours`,
  );
  for (const [name, { seconds, points }] of Object.entries(ours)) {
    const other = theirs[name];
    const own = (1e9 * seconds) / points;
    const rate = other === undefined ? null : (1e9 * other.seconds) / other.points;
    const words = rate === null ? "not measured" : `${rate.toFixed(1).padStart(8)}   ${(rate / own).toFixed(2)}`;
    console.log(`${name.padEnd(34)}${String(points).padStart(12)}   ${own.toFixed(1).padStart(8)} ${words}`);
  }
} catch (error) {
  console.error(error.message);
  process.exitCode = 1;
} finally {
  rmSync(folder, { recursive: true, force: true });
}
