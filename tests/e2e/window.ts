import { type ChildProcess, spawn } from "node:child_process";
import { mkdtempSync, rmSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { fileURLToPath } from "node:url";
import { type Browser, chromium, type Page } from "playwright-core";
import { BROWSER_FLAGS, installedBrowser } from "../browser.mjs";

export const ROOT = fileURLToPath(new URL("../..", import.meta.url));

/** The built app, started as `npm start` starts it where Electron cannot be had, with a state folder of its own. */
export interface RunningApp {
  readonly url: string;
  readonly state: string;
  stop(): Promise<void>;
}

export async function startApp(files: readonly string[] = [], state?: string): Promise<RunningApp> {
  const folder = state ?? mkdtempSync(join(tmpdir(), "isohypse-state-"));
  const child: ChildProcess = spawn(process.execPath, [join(ROOT, "app/launch/start.mjs"), "--no-browser", ...files], {
    cwd: ROOT,
    env: { ...process.env, ISOHYPSE_SHELL: "local", ISOHYPSE_STATE: folder },
    stdio: ["ignore", "pipe", "pipe"],
  });
  const url = await new Promise<string>((resolve, reject) => {
    let said = "";
    const listen = (part: Buffer) => {
      said += part.toString();
      const match = /http:\/\/127\.0\.0\.1:\d+\/\S+/.exec(said);
      if (match !== null) resolve(match[0]);
    };
    child.stdout?.on("data", listen);
    child.stderr?.on("data", listen);
    child.once("exit", (code) => reject(new Error(`The app stopped with ${code}: ${said}`)));
  });
  return {
    url,
    state: folder,
    stop: () =>
      new Promise((resolve) => {
        child.once("exit", () => {
          if (state === undefined) rmSync(folder, { recursive: true, force: true });
          resolve();
        });
        child.kill();
      }),
  };
}

export async function openBrowser(): Promise<Browser> {
  const executablePath = installedBrowser();
  if (executablePath === null) throw new Error("No browser: see tests/browser.mjs");
  return chromium.launch({ executablePath, headless: true, args: BROWSER_FLAGS });
}

/** A page on the app that fails the test on any error the page throws or logs. */
export async function openPage(
  browser: Browser,
  url: string,
  size = { width: 1440, height: 900 },
): Promise<{ page: Page; errors: string[] }> {
  const context = await browser.newContext({ viewport: size, acceptDownloads: true, reducedMotion: "reduce" });
  const page = await context.newPage();
  const errors: string[] = [];
  page.on("pageerror", (error) => errors.push(error.message));
  page.on("console", (message) => {
    if (message.type() === "error") errors.push(message.text());
  });
  await page.goto(url);
  return { page, errors };
}
