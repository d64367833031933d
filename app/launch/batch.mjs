// `npm run batch -- …`: builds the tools if they are older than their sources, then runs the batch command.
import { join } from "node:path";
import { pathToFileURL } from "node:url";
import { ensureBuilt, ROOT } from "./build.mjs";

await ensureBuilt(["tools"]);
await import(pathToFileURL(join(ROOT, "out/tools/batch/main.js")).href);
