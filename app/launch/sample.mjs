// `npm run sample`: makes the invented sample case anew.
import { join } from "node:path";
import { pathToFileURL } from "node:url";
import { ensureBuilt, ROOT } from "./build.mjs";

await ensureBuilt(["tools"]);
await import(pathToFileURL(join(ROOT, "out/tools/sample/make.js")).href);
