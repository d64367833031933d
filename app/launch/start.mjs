// `npm start [-- FILE…]`: opens the app. Electron where its program can be had, else the same window in a browser.
import { spawn, spawnSync } from "node:child_process";
import { existsSync, readFileSync } from "node:fs";
import { join, resolve } from "node:path";
import { pathToFileURL } from "node:url";
import { ensureBuilt, ROOT } from "./build.mjs";

const INSTALL_SECONDS = 120;
const electronFolder = join(ROOT, "node_modules/electron");

/** Path of Electron's program, or the reason in words why there is none. */
function electronProgram() {
  if (process.env.ISOHYPSE_SHELL === "local") return { reason: "ISOHYPSE_SHELL=local asks for the browser" };
  if (process.platform === "linux" && !process.env.DISPLAY && !process.env.WAYLAND_DISPLAY)
    return { reason: "there is no display for a window of its own" };
  const pathFile = join(electronFolder, "path.txt");
  if (!existsSync(pathFile)) {
    console.log("Fetching Electron's program, once …");
    const install = spawnSync(process.execPath, [join(electronFolder, "install.js")], {
      timeout: INSTALL_SECONDS * 1000,
      encoding: "utf8",
    });
    if (install.status !== 0 || !existsSync(pathFile)) {
      const why = (install.error?.message ?? install.stderr ?? "")
        .trim()
        .split("\n")
        .find((line) => /error/i.test(line));
      return { reason: `Electron's program could not be fetched (${why ?? "no answer"})` };
    }
  }
  const program = join(electronFolder, "dist", readFileSync(pathFile, "utf8").trim());
  return existsSync(program) ? { program } : { reason: `Electron's program is missing at ${program}` };
}

const words = process.argv.slice(2);
if (words.includes("--help")) {
  console.log(
    "npm start [-- FILE…] [--browser NAME | --no-browser]\n\n" +
      "Opens Isohypse on the files, or on the invented sample case when none is named.\n" +
      "--no-browser   print the address and open nothing (where Electron cannot be had)\n" +
      "--browser NAME the browser program to open\n",
  );
  process.exit(0);
}
await ensureBuilt(["window", "tools"]);
const found = electronProgram();
if (found.program !== undefined) {
  const files = words.filter((word) => !word.startsWith("--")).map((word) => resolve(word));
  const child = spawn(found.program, [ROOT, "--", ...files], { stdio: "inherit" });
  child.on("exit", (code) => {
    process.exitCode = code ?? 1;
  });
} else {
  console.log(`${found.reason[0].toUpperCase()}${found.reason.slice(1)}: the same window opens in a browser instead.`);
  await import(pathToFileURL(join(ROOT, "out/tools/local/main.js")).href);
}
