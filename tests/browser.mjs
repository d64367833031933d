// The Chromium-family browser that the window's tests drive: an installed one, else one that is fetched, else words.
import { spawnSync } from "node:child_process";
import { accessSync, constants } from "node:fs";
import { delimiter, join } from "node:path";

const NAMES = [
  "chromium",
  "chromium-browser",
  "google-chrome",
  "google-chrome-stable",
  "microsoft-edge",
  "brave-browser",
];
const ELSEWHERE = [
  "/Applications/Google Chrome.app/Contents/MacOS/Google Chrome",
  "/Applications/Chromium.app/Contents/MacOS/Chromium",
  "/Applications/Microsoft Edge.app/Contents/MacOS/Microsoft Edge",
  "C:\\Program Files\\Google\\Chrome\\Application\\chrome.exe",
  "C:\\Program Files (x86)\\Microsoft\\Edge\\Application\\msedge.exe",
];

/** Flags for a headless run that asks nothing of the network. */
export const BROWSER_FLAGS = [
  "--no-sandbox",
  "--disable-gpu",
  "--disable-quic",
  "--no-first-run",
  "--disable-background-networking",
  "--disable-component-update",
  "--disable-sync",
];

function runnable(path) {
  try {
    accessSync(path, constants.X_OK);
    return true;
  } catch {
    return false;
  }
}

/** Path of an installed browser, or null. ISOHYPSE_CHROMIUM names one that lies elsewhere. */
export function installedBrowser() {
  const named = process.env.ISOHYPSE_CHROMIUM;
  if (named) return runnable(named) ? named : null;
  const folders = (process.env.PATH ?? "").split(delimiter);
  const places = [...NAMES.flatMap((name) => folders.map((folder) => join(folder, name))), ...ELSEWHERE];
  return places.find(runnable) ?? null;
}

/** Path of a browser, fetching one if none is installed. @throws Error that says what to install. */
export async function browserPath() {
  const found = installedBrowser();
  if (found !== null) return found;
  if (process.getuid?.() === 0 && spawnSync("apt-get", ["--version"]).status === 0) {
    console.log("No browser is installed: installing Debian's chromium …");
    spawnSync("apt-get", ["update"], { stdio: "ignore" });
    spawnSync("apt-get", ["install", "-y", "chromium"], { stdio: "inherit" });
  } else {
    console.log("No browser is installed: fetching the test tool's own …");
    spawnSync("npx", ["playwright-core", "install", "chromium"], { stdio: "inherit" });
    const { chromium } = await import("playwright-core");
    if (runnable(chromium.executablePath())) return chromium.executablePath();
  }
  const installed = installedBrowser();
  if (installed !== null) return installed;
  throw new Error(
    "The window's tests need a Chromium-family browser. Install chromium, Chrome or Edge, or set ISOHYPSE_CHROMIUM to the path of one.",
  );
}
