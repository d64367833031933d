// `npm test`: types, style, unit tests, then the window's tests in a browser. Ends with one line 'N passed, N failed, N skipped'.
import { spawnSync } from "node:child_process";
import { mkdtempSync, readFileSync, rmSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { fileURLToPath } from "node:url";
import { browserPath } from "./browser.mjs";

const root = fileURLToPath(new URL("..", import.meta.url));
const bin = (name) => join(root, "node_modules/.bin", process.platform === "win32" ? `${name}.cmd` : name);
const scratch = mkdtempSync(join(tmpdir(), "isohypse-test-"));
const total = { passed: 0, failed: 0, skipped: 0 };

function heading(words) {
  console.log(`\n— ${words}`);
}

/** A step that passes or fails as a whole. */
function whole(words, command, args) {
  heading(words);
  const run = spawnSync(command, args, { cwd: root, stdio: "inherit" });
  total[run.status === 0 ? "passed" : "failed"] += 1;
  return run.status === 0;
}

/** A vitest run, counted test by test; a run that dies or counts nothing is a failure. */
function counted(words, config, environment = {}) {
  heading(words);
  const report = join(scratch, `${total.passed}.json`);
  const args = ["run", "--config", config, "--reporter=default", "--reporter=json", `--outputFile.json=${report}`];
  const run = spawnSync(bin("vitest"), args, { cwd: root, stdio: "inherit", env: { ...process.env, ...environment } });
  try {
    const counts = JSON.parse(readFileSync(report, "utf8"));
    total.passed += counts.numPassedTests;
    total.failed += counts.numFailedTests;
    total.skipped += counts.numPendingTests + counts.numTodoTests;
    const broken = run.status !== 0 && counts.numFailedTests === 0;
    if (broken || counts.numTotalTests === 0) total.failed += 1;
  } catch {
    total.failed += 1;
  }
}

whole("types", process.execPath, ["app/launch/types.mjs"]);
whole("style", bin("biome"), ["check", "."]);
counted("unit tests", "tests/vitest.config.ts");
if (whole("build", process.execPath, ["app/launch/build.mjs"])) {
  try {
    counted("the window, in a browser", "tests/e2e/vitest.config.ts", { ISOHYPSE_CHROMIUM: await browserPath() });
  } catch (error) {
    console.error(error.message);
    total.failed += 1;
  }
}
rmSync(scratch, { recursive: true, force: true });
console.log(`\n${total.passed} passed, ${total.failed} failed, ${total.skipped} skipped`);
process.exitCode = total.failed === 0 ? 0 : 1;
