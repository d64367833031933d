// `npm run bench [-- ROUNDS]`: the decomposition of a twenty-year daily 2.5° record, from file to result file, beside the same
// in vectorised numpy, in turn. Prints medians, their ratio and both peak memories. It judges nothing.
import { spawnSync } from "node:child_process";
import { mkdtempSync, rmSync, statSync, writeFileSync } from "node:fs";
import { availableParallelism, tmpdir } from "node:os";
import { join } from "node:path";
import { fileURLToPath } from "node:url";
import { ensureBuilt, ROOT } from "../../app/launch/build.mjs";
import { makeRecord } from "./make-record.mjs";

const here = fileURLToPath(new URL(".", import.meta.url));
const python = process.env.PYTHON ?? "python3";
const rounds = Number(process.argv[2] ?? 5);

/** Run a command as a child of a small python that asks the system for its time and peak memory. */
const TIMER = `
import resource, subprocess, sys, time
t = time.perf_counter()
code = subprocess.run(sys.argv[1:], stdout=subprocess.DEVNULL).returncode
print(time.perf_counter() - t, resource.getrusage(resource.RUSAGE_CHILDREN).ru_maxrss / 1024, code)
`;
function timed(command) {
  const run = spawnSync(python, ["-c", TIMER, ...command], { encoding: "utf8" });
  const [seconds, megabytes, code] = (run.stdout ?? "").trim().split(" ").map(Number);
  if (code !== 0) throw new Error(`${command.join(" ")} failed:\n${run.stderr}`);
  return { seconds, megabytes };
}
const median = (values) => values.toSorted((a, b) => a - b)[Math.floor(values.length / 2)];

if (spawnSync(python, ["-c", "import numpy, scipy"]).status !== 0) {
  console.error(`The bench needs ${python} with numpy and scipy; set PYTHON to one that has them.`);
  process.exit(2);
}
await ensureBuilt(["tools"]);
const folder = mkdtempSync(join(tmpdir(), "isohypse-bench-"));
try {
  const record = join(folder, "record.nc");
  await makeRecord(record);
  console.log(
    `record: 7305 days, 73 x 144, ${(statSync(record).size / 1e6).toFixed(0)} MB; ${availableParallelism()} cores; ${rounds} rounds in turn`,
  );
  const recipe = join(folder, "recipe.json");
  writeFileSync(
    recipe,
    JSON.stringify({
      isohypse: 1,
      results: [{ id: "waves", diagnostic: "zonal-waves", field: "geopotential_height", level: 500, waves: [1, 6] }],
    }),
  );
  const hashed = [process.execPath, join(ROOT, "app/launch/batch.mjs"), recipe, record, "--out", folder];
  // numpy's side makes no SHA-256 of the file either.
  const ours = [...hashed, "--no-hash"];
  const theirs = [python, join(here, "zonal_waves.py"), record, join(folder, "numpy.nc")];
  timed(ours);
  timed(theirs);
  const runs = { isohypse: [], numpy: [], "with SHA-256": [] };
  for (let i = 0; i < rounds; i++) {
    runs.isohypse.push(timed(ours));
    runs.numpy.push(timed(theirs));
    runs["with SHA-256"].push(timed(hashed));
  }
  console.log("\n             seconds (min, median, max)      peak MB (median)");
  for (const [name, list] of Object.entries(runs)) {
    const seconds = list.map((run) => run.seconds);
    const figures = [Math.min(...seconds), median(seconds), Math.max(...seconds)]
      .map((s) => s.toFixed(2).padStart(6))
      .join("  ");
    console.log(
      `${name.padEnd(13)}${figures}              ${median(list.map((run) => run.megabytes))
        .toFixed(0)
        .padStart(6)}`,
    );
  }
  const ratios = runs.isohypse.map((run, i) => runs.numpy[i].seconds / run.seconds);
  console.log(
    `\nnumpy / isohypse: time ${median(ratios).toFixed(2)}, memory ${(median(runs.numpy.map((r) => r.megabytes)) / median(runs.isohypse.map((r) => r.megabytes))).toFixed(2)}`,
  );
  const agreement = spawnSync(python, [join(here, "compare.py"), join(folder, "waves.nc"), join(folder, "numpy.nc")], {
    encoding: "utf8",
  });
  console.log(`worst differences: ${agreement.stdout.trim()}${agreement.status === 0 ? "" : "  THEY DISAGREE"}`);
  process.exitCode = agreement.status === 0 ? 0 : 1;
} catch (error) {
  console.error(error.message);
  process.exitCode = 1;
} finally {
  rmSync(folder, { recursive: true, force: true });
}
