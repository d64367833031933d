import { spawnSync } from "node:child_process";
import { createHash } from "node:crypto";
import {
  chmodSync,
  existsSync,
  mkdirSync,
  mkdtempSync,
  readdirSync,
  readFileSync,
  rmSync,
  utimesSync,
  writeFileSync,
} from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { pathToFileURL } from "node:url";
import { afterAll, beforeAll, beforeEach, describe, expect, test } from "vitest";
import { type BatchIo, run } from "../../../app/batch/command.ts";
import { openFileSource } from "../../../app/batch/file-source.ts";
import { openNetcdfClassic } from "../../../core/formats/netcdf/classic-store.ts";
import { classicFile } from "../../../core/formats/netcdf/write.ts";
import { type BuiltBatch, builtBatch, listeningIo, program } from "./built-batch.ts";
import reference from "./reference/monthly_waves.json" with { type: "json" };

const STEPS = 220;
const N_LAT = 73;
const N_LON = 144;
const REAL = join(process.env.ISOHYPSE_DATA ?? join(import.meta.dirname, "../../../../shared/data"), "eraint_uvz.nc");

let built: BuiltBatch;
let folder = "";
let data = "";
let out = "";

/** Heights of 220 days on a 2.5° grid as 32-bit numbers: over 9 MB, so that threads are started for it. */
function writeRecord(path: string): void {
  const lat = Float64Array.from({ length: N_LAT }, (_, j) => 90 - 2.5 * j);
  const lon = Float64Array.from({ length: N_LON }, (_, i) => 2.5 * i);
  const z = new Float32Array(STEPS * N_LAT * N_LON);
  for (let t = 0, at = 0; t < STEPS; t++)
    for (const φ of lat)
      for (const λ of lon)
        z[at++] =
          5500 -
          8 * Math.abs(φ) +
          Math.cos((φ * Math.PI) / 180) *
            (120 * Math.cos((2 * (λ - 30 - t) * Math.PI) / 180) + 60 * Math.cos((5 * (λ + 3 * t) * Math.PI) / 180));
  const file = classicFile({
    dimensions: { time: STEPS, lat: N_LAT, lon: N_LON },
    attributes: { title: "A made-up record" },
    variables: [
      {
        name: "time",
        dims: ["time"],
        attributes: { units: "days since 2001-01-01", calendar: "standard" },
        data: Float64Array.from({ length: STEPS }, (_, t) => t),
      },
      { name: "lat", dims: ["lat"], attributes: { units: "degrees_north" }, data: lat },
      { name: "lon", dims: ["lon"], attributes: { units: "degrees_east" }, data: lon },
      {
        name: "hgt",
        dims: ["time", "lat", "lon"],
        attributes: { units: "gpm", standard_name: "geopotential_height" },
        data: z,
      },
    ],
  });
  writeFileSync(path, Buffer.concat([...file]));
}

function recipeFile(recipe: unknown, name = "recipe.json"): string {
  const path = join(folder, name);
  writeFileSync(path, typeof recipe === "string" ? recipe : JSON.stringify(recipe, null, 2));
  return path;
}

function waves(id: string, change: Record<string, unknown> = {}) {
  return { id, diagnostic: "zonal-waves", field: "geopotential_height", band: [45, 65], waves: [1, 6], ...change };
}

const RECIPE = {
  isohypse: 1,
  background: { kind: "annual-cycle", harmonics: 2 },
  results: [
    waves("anomaly", { of: "anomaly" }),
    waves("rows", { band: null, period: ["2001-02-01", "2001-03-31"] }),
    { id: "mean", diagnostic: "climatology", field: "geopotential_height" },
    { id: "running", diagnostic: "climatology", field: "geopotential_height", mean: "running-mean", days: 5 },
  ],
};

beforeAll(async () => {
  folder = mkdtempSync(join(tmpdir(), "isohypse-command-"));
  data = join(folder, "record.nc");
  writeRecord(data);
  built = await builtBatch();
});
afterAll(() => {
  built?.remove();
  rmSync(folder, { recursive: true, force: true });
});
beforeEach(() => {
  out = mkdtempSync(join(folder, "out-"));
});

function batch(args: readonly string[], more: Partial<BatchIo> = {}) {
  const said = listeningIo(built.workerUrl, more);
  return run(args, said.io).then((code) => ({ code, ...said }));
}

/** The bytes of a result file after its provenance: history holds the time of day. */
function withoutClock(path: string): string {
  return readFileSync(path, "latin1").replaceAll(/\d{4}-\d\d-\d\dT\d\d:\d\d:\d\d\.\d{3}Z/g, "NOW");
}

async function numbers(path: string, variable: string): Promise<Float64Array> {
  const source = await openFileSource(path);
  const store = await openNetcdfClassic(source);
  const shape = store.variables.find(({ name }) => name === variable)?.shape ?? [];
  const values = await store.readNumbers(
    variable,
    shape.map(() => 0),
    shape,
  );
  await source.close();
  return values;
}

describe("a run", () => {
  test("bit-identical files with one worker, two and three; run.json tells what was done", async () => {
    const recipe = recipeFile(RECIPE);
    const outs = [1, 2, 3].map((workers) => join(out, String(workers)));
    for (const [i, to] of outs.entries()) {
      const { code, stderr } = await batch([recipe, data, "--out", to, "--workers", String(i + 1)]);
      expect([code, stderr]).toEqual([0, ""]);
    }
    const names = ["anomaly.csv", "anomaly.nc", "mean.csv", "mean.nc", "rows.csv", "rows.nc", "run.json", "running.nc"];
    for (const to of outs) expect(readdirSync(to).sort()).toEqual(names);
    for (const name of names.filter((candidate) => candidate !== "run.json"))
      for (const to of outs.slice(1))
        expect(withoutClock(join(to, name)) === withoutClock(join(outs[0], name)), name).toBe(true);

    const record = JSON.parse(readFileSync(join(outs[1], "run.json"), "utf8"));
    expect(record).toMatchObject({
      isohypse: 1,
      workers: 2,
      recipe: RECIPE,
      background: RECIPE.background,
      stopped: false,
      failed: [],
      inputs: [{ file: data, sha256: createHash("sha256").update(readFileSync(data)).digest("hex") }],
    });
    expect(record.program).toMatch(/^Isohypse \d/);
    expect(record.results.map(({ id }: { id: string }) => id)).toEqual(["anomaly", "rows", "mean", "running"]);
    expect(record.results[0].options).toMatchObject({ of: "anomaly", average: "coherent", amplitude_floor: 0.25 });
    expect(record.results[3].notes.join(" ")).toContain("No CSV");
    expect(record.results[3].files).toEqual([join(outs[1], "running.nc")]);
  }, 60_000);

  test("a result that fails leaves the others written: exit 1", async () => {
    const recipe = recipeFile({ isohypse: 1, results: [waves("gone", { level: 500 }), waves("there")] });
    const { code, stderr, stdout } = await batch([recipe, data, "--out", out]);
    expect(code).toBe(1);
    expect(stderr).toContain("gone failed: record.nc/hgt states no level, but 500 hPa is asked for");
    expect(stdout).toContain("there.nc");
    expect(readdirSync(out).sort()).toEqual(["run.json", "there.csv", "there.nc"]);
    expect(JSON.parse(readFileSync(join(out, "run.json"), "utf8")).failed).toHaveLength(1);
  });

  test("a worker that dies fails its result in words, and the next result is computed by its replacement", async () => {
    // A worker that ends at its first job, and is the real one the second time.
    const flag = join(out, "died");
    const dying = join(folder, "dying.mjs");
    writeFileSync(
      dying,
      `import { existsSync, writeFileSync } from "node:fs";
import { parentPort } from "node:worker_threads";
if (existsSync(${JSON.stringify(flag)})) await import(${JSON.stringify(built.workerUrl.href)});
else parentPort.on("message", (message) => {
  if (message.kind !== "job") return;
  writeFileSync(${JSON.stringify(flag)}, "");
  process.exit(7);
});`,
    );
    const recipe = recipeFile({
      isohypse: 1,
      results: [waves("first", { period: ["2001-01-01", "2001-01-10"] }), waves("second")],
    });
    const { code, stderr } = await batch([recipe, data, "--out", out], { workerUrl: pathToFileURL(dying) });
    expect(code).toBe(1);
    expect(stderr).toBe(
      "first failed: A worker died in the middle of its work and was replaced: it ended with code 7\n",
    );
    expect(readdirSync(out).sort()).toEqual(["died", "run.json", "second.csv", "second.nc"]);
  });

  test("a worker that cannot be loaded fails every result in words", async () => {
    const recipe = recipeFile({ isohypse: 1, results: [waves("a"), waves("b")] });
    const { code, stderr } = await batch([recipe, data, "--out", out], {
      workerUrl: pathToFileURL(join(out, "no.mjs")),
    });
    expect(code).toBe(1);
    expect(stderr).toMatch(/^a failed: A worker .*\nb failed: A worker /);
  });

  test("cancelled: exit 130, what is done is whole, nothing half-written, run.json says so", async () => {
    const controller = new AbortController();
    const recipe = recipeFile({ isohypse: 1, results: [waves("a"), waves("b"), waves("c", { band: null })] });
    const said = listeningIo(built.workerUrl, { signal: controller.signal });
    const io: BatchIo = {
      ...said.io,
      stdout(text) {
        said.io.stdout(text);
        if (text.startsWith("a:")) controller.abort();
      },
    };
    expect(await run([recipe, data, "--out", out], io)).toBe(130);
    expect(readdirSync(out).sort()).toEqual(["a.csv", "a.nc", "run.json"]);
    const record = JSON.parse(readFileSync(join(out, "run.json"), "utf8"));
    expect(record).toMatchObject({ stopped: true, failed: [{ id: "b" }, { id: "c" }] });
  });

  test("a name that is taken by a folder fails that result, and leaves no half file", async () => {
    mkdirSync(join(out, "a.csv"));
    const recipe = recipeFile({ isohypse: 1, results: [waves("a"), waves("b")] });
    const { code, stderr } = await batch([recipe, data, "--out", out]);
    expect(code).toBe(1);
    expect(stderr).toContain("a failed: it could not be written");
    expect(readdirSync(out).filter((name) => name.endsWith(".part"))).toEqual([]);
    expect(existsSync(join(out, "b.nc"))).toBe(true);
  });

  test("a file that changes under the run is told: exit 1", async () => {
    const recipe = recipeFile({ isohypse: 1, results: [waves("a")] });
    const said = listeningIo(built.workerUrl);
    const io: BatchIo = { ...said.io, stdout: () => utimesSync(data, new Date(), new Date(2001, 1, 1)) };
    expect(await run([recipe, data, "--out", out], io)).toBe(1);
    expect(said.stderr).toContain(`${data} changed while it was read`);
  });

  test("the recipe's corrections are heeded", async () => {
    const corrections = [{ file: "record.nc", variable: "hgt", quantity: "air_temperature", units: "K", level: 500 }];
    const recipe = recipeFile({
      isohypse: 1,
      corrections,
      results: [waves("t", { field: "air_temperature", level: 500 })],
    });
    const { code, stderr } = await batch([recipe, data, "--out", out]);
    expect([code, stderr]).toEqual([0, ""]);
    expect(readFileSync(join(out, "t.csv"), "utf8").split("\n")[0]).toContain("amplitude (K)");
  });

  test("progress goes to a terminal's stderr", async () => {
    const recipe = recipeFile({ isohypse: 1, results: [waves("a", { band: null })] });
    const { stderr } = await batch([recipe, data, "--out", out], { showsProgress: true });
    expect(stderr).toMatch(/^\ra: Zonal waves: \d+ %/);
    expect(stderr.endsWith("\r\u001b[K")).toBe(true);
  });
});

describe("exit 2, in words, nothing run", () => {
  test.each([
    ["no arguments", () => [], "A RECIPE.json and at least one FILE are wanted"],
    ["an unknown option", () => ["--frobnicate"], "--frobnicate"],
    [
      "a missing recipe",
      () => [join(folder, "no.json"), data, "--out", out],
      "the recipe cannot be read: there is no such file",
    ],
    [
      "a recipe that is no JSON",
      () => [recipeFile("{ isohypse: 1 }"), data, "--out", out],
      "recipe.json: line 1: not JSON",
    ],
    [
      "a recipe with a misspelt key",
      () => [recipeFile({ isohypse: 1, results: [waves("a", { bnd: [1, 2] })] }), data, "--out", out],
      'results[0].bnd: unknown key; did you mean "band"?',
    ],
    ["a missing file", () => [recipeFile(RECIPE), join(folder, "no.nc"), "--out", out], "no.nc: there is no such file"],
    [
      "a file of no known format",
      () => [recipeFile(RECIPE), recipeFile("text", "a.txt"), "--out", out],
      "a.txt is text",
    ],
    ["one file named twice", () => [recipeFile(RECIPE), data, data, "--out", out], "record.nc is named twice"],
    [
      "an output folder that is a file",
      () => [recipeFile(RECIPE), data, "--out", data],
      "record.nc: nothing can be written there",
    ],
    ["help for an unknown diagnostic", () => ["--help", "zonal-wave"], "did you mean zonal-waves?"],
    ["a list of a missing file", () => ["--list", join(folder, "no.nc")], "there is no such file"],
  ])("%s", async (_, args, words) => {
    const { code, stderr, stdout } = await batch(args());
    expect(code).toBe(2);
    expect(stderr).toContain(words);
    expect(stderr).not.toMatch(/\n\s+at /);
    expect(stdout).toBe("");
    expect(readdirSync(out)).toEqual([]);
  });

  test("an output folder that cannot be written", async (context) => {
    if (process.getuid?.() === 0) return context.skip("root may write everywhere");
    chmodSync(out, 0o500);
    const { code, stderr } = await batch([recipeFile(RECIPE), data, "--out", out]);
    chmodSync(out, 0o700);
    expect(code).toBe(2);
    expect(stderr).toContain("nothing can be written there: permission denied");
  });
});

describe("--list, --help, --schema", () => {
  test("--list says what the file holds and what it was taken for", async () => {
    const { code, stdout } = await batch(["--list", data]);
    expect(code).toBe(0);
    expect(stdout).toContain("record.nc/hgt");
    expect(stdout).toContain("geopotential_height: standard name");
    expect(stdout).toContain("220 times (standard calendar): 2001-01-01T00:00:00Z … 2001-08-08T00:00:00Z");
    expect(stdout).toContain("73 rows -90 … 90 °N, 144 columns 0 … 357.5 °E");
  });

  test("--list --json is JSON with the axes' numbers", async () => {
    const { stdout } = await batch(["--list", data, "--json"]);
    const [file] = JSON.parse(stdout).files;
    expect(file.fields[0]).toMatchObject({ key: "record.nc/hgt", quantity: "geopotential_height", levels: null });
    expect(file.fields[0].grid.lat.slice(0, 2)).toEqual([-90, -87.5]);
  });

  test("--help and --schema", async () => {
    expect((await batch(["--help"])).stdout).toContain("zonal-waves");
    expect((await batch(["--help", "zonal-waves"])).stdout).toContain('"amplitude_floor"');
    expect(JSON.parse((await batch(["--schema"])).stdout).$schema).toContain("draft-07");
  });
});

describe("the built program", () => {
  test("exit codes and Ctrl+C", async () => {
    const recipe = recipeFile({ isohypse: 1, results: [waves("a")] });
    expect(await program(built.main, [recipe, data, "--out", out])).toMatchObject({ code: 0, stderr: "" });
    expect(await program(built.main, [])).toMatchObject({ code: 2 });
    const failing = recipeFile({ isohypse: 1, results: [waves("a", { level: 5 })] }, "failing.json");
    expect(await program(built.main, [failing, data, "--out", out])).toMatchObject({ code: 1 });
    const many = Array.from({ length: 60 }, (_, i) => waves(`w${i}`, { band: null }));
    const long = recipeFile({ isohypse: 1, results: many }, "long.json");
    const to = join(out, "long");
    const stopped = await program(built.main, [long, data, "--out", to], (text, kill) => {
      if (text.includes("w0.nc")) kill("SIGINT");
    });
    expect(stopped.code).toBe(130);
    expect(readdirSync(to).filter((name) => !/^(w\d+\.(nc|csv)|run\.json)$/.test(name))).toEqual([]);
    expect(JSON.parse(readFileSync(join(to, "run.json"), "utf8")).stopped).toBe(true);
  }, 60_000);
});

describe("ERA-Interim, January: waves of Z500 along 60°N (numpy.fft: reference/monthly_waves.py)", () => {
  test.skipIf(!existsSync(REAL))("the waves that numpy finds", async () => {
    const recipe = recipeFile({
      isohypse: 1,
      results: [waves("waves", { level: 500, band: [60, 60], waves: [1, 10], period: [1, 1] })],
    });
    const { code, stderr } = await batch([recipe, REAL, "--out", out]);
    expect([code, stderr]).toEqual([0, ""]);
    const [amplitude, ridge, share] = await Promise.all(
      ["amplitude", "ridge_longitude", "variance_share"].map((name) => numbers(join(out, "waves.nc"), name)),
    );
    // Both work in float64 on 480 numbers near 5200 gpm: each transform is off by at most log2(480) · 2^-53 · 5200 · a few.
    const limit = 5200 * 9 * 4 * 2 ** -53;
    reference.waves.forEach((wave, i) => {
      const within = (got: number, wanted: number, most: number, what: string) =>
        expect(
          Math.abs(got - wanted),
          `k=${wave.wavenumber} ${what}: ${got} and ${wanted}, limit ${most}`,
        ).toBeLessThanOrEqual(most);
      within(amplitude[i], wave.amplitude, limit, "amplitude");
      // An angle is off by the error of c over |c|, k times less as longitude.
      within(ridge[i], wave.ridge_longitude, ((limit / wave.amplitude) * 180) / Math.PI, "ridge");
      within(share[i], wave.variance_share, (4 * limit) / wave.amplitude, "share");
    });
    // The same to a tenth, as people quote them.
    for (const [i, tenth] of [46.8, 85.1, 57.9].entries())
      expect(Math.abs(amplitude[i] - tenth)).toBeLessThanOrEqual(0.1);
    for (const [i, tenth] of [27.9, 31.2, 107.6].entries()) expect(Math.abs(ridge[i] - tenth)).toBeLessThanOrEqual(0.1);
  });

  test.skipIf(!existsSync(REAL))("ncdump reads every result of the real file", async (context) => {
    const recipe = recipeFile({
      isohypse: 1,
      background: { kind: "record-mean" },
      results: [
        waves("waves", { level: [200, 500], band: null, reconstruct: [0, 1, 2], point: [60, 10] }),
        { id: "mean", diagnostic: "climatology", field: "eastward_wind", level: 200 },
      ],
    });
    expect((await batch([recipe, REAL, "--out", out])).stderr).toBe("");
    for (const name of ["waves.nc", "mean.nc"]) {
      const dump = spawnSync("ncdump", ["-h", join(out, name)], { encoding: "utf8" });
      if (dump.error !== undefined) return context.skip("ncdump is not installed");
      expect(dump.status, dump.stderr).toBe(0);
      expect(dump.stdout).toContain('Conventions = "CF-1.11"');
    }
  });
});
