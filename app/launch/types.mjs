// `npm run types`: checks the types of core, app and tests, each against the globals that it may use.
import { spawnSync } from "node:child_process";
import { join } from "node:path";
import { fileURLToPath } from "node:url";

const root = fileURLToPath(new URL("../../", import.meta.url));
const compiler = join(root, "node_modules/typescript/bin/tsc");
const failed = ["core", "app", "tests"].filter(
  (project) => spawnSync(process.execPath, [compiler, "-p", join(root, project)], { stdio: "inherit" }).status !== 0,
);
if (failed.length > 0) {
  console.error(`Types do not hold in: ${failed.join(", ")}`);
  process.exitCode = 1;
}
