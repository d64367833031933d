import { readFileSync } from "node:fs";
import { join, resolve } from "node:path";
import { CaseStore, stateFolder } from "../shell/case-store.ts";
import { FileRegistry } from "../shell/file-registry.ts";
import { KnownPlaces } from "../shell/known-places.ts";
import { createShell } from "../shell/shell.ts";
import { browserCommand, startBrowser } from "./browser.ts";
import { startLocalHost } from "./host.ts";

/** Files and choices of `npm start`'s words. @throws Error in words for an unknown option. */
function startWords(words: readonly string[]): { files: string[]; browser: string | null; opens: boolean } {
  const files: string[] = [];
  let browser: string | null = process.env.ISOHYPSE_BROWSER ?? null;
  let opens = true;
  for (let i = 0; i < words.length; i++) {
    const word = words[i] as string;
    if (word === "--no-browser") opens = false;
    else if (word === "--browser") {
      i += 1;
      browser = words[i] ?? null;
    } else if (word.startsWith("--")) throw new Error(`${word} is not an option of start; see npm start -- --help`);
    else files.push(word);
  }
  return { files, browser, opens };
}

async function main(): Promise<void> {
  const words = startWords(process.argv.slice(2));
  // Built to out/tools/local/main.js, three folders below the project.
  const root = resolve(import.meta.dirname, "../../..");
  const version = (JSON.parse(readFileSync(join(root, "package.json"), "utf8")) as { version: string }).version;
  const registry = new FileRegistry("/files/");
  const folder = stateFolder(process.env, process.platform);
  const shell = createShell({
    kind: "local",
    version,
    named: words.files,
    sampleFolder: join(root, "sample-data"),
    registry,
    store: new CaseStore(folder),
    places: new KnownPlaces(folder),
    dialog: null,
  });
  const host = await startLocalHost(join(root, "out/renderer"), registry, shell);
  console.log(`Isohypse is open at ${host.url}\nStop it with Ctrl+C.`);
  if (!words.opens) return;
  const command = browserCommand(host.url, words.browser, process.platform, process.env);
  if (command === null) console.log("No display or browser was found here: open that address yourself.");
  else if (!(await startBrowser(command)))
    console.log(`${command[0]} could not be started: open that address yourself.`);
}

main().catch((error: unknown) => {
  console.error(error instanceof Error ? error.message : error);
  process.exitCode = 2;
});
