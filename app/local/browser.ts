import { spawn } from "node:child_process";
import { accessSync, constants } from "node:fs";
import { delimiter, join } from "node:path";

const LINUX_BROWSERS = ["chromium", "chromium-browser", "google-chrome", "microsoft-edge", "brave-browser", "firefox"];

/** Full path of the first of `names` that can be run, or null. */
export function programOnPath(names: readonly string[], path: string): string | null {
  for (const name of names) {
    for (const folder of path.split(delimiter)) {
      const full = join(folder, name);
      try {
        accessSync(full, constants.X_OK);
        return full;
      } catch {
        // not here
      }
    }
  }
  return null;
}

/** The command that opens `url` for the person at this machine, or null if nobody could see it. */
export function browserCommand(
  url: string,
  wanted: string | null,
  platform: string,
  environment: Readonly<Record<string, string | undefined>>,
): readonly string[] | null {
  if (wanted !== null) return [wanted, url];
  if (platform === "darwin") return ["open", url];
  if (platform === "win32") return ["rundll32", "url.dll,FileProtocolHandler", url];
  if (!environment.DISPLAY && !environment.WAYLAND_DISPLAY) return null;
  const path = environment.PATH ?? "";
  const opener = programOnPath(["xdg-open", ...LINUX_BROWSERS], path);
  return opener === null ? null : [opener, url];
}

/** Start the command and let it go its own way. @returns false if it could not be started. */
export function startBrowser(command: readonly string[]): Promise<boolean> {
  const [program, ...args] = command as [string, ...string[]];
  return new Promise((resolve) => {
    const child = spawn(program, args, { stdio: "ignore", detached: true });
    child.once("error", () => resolve(false));
    child.once("spawn", () => {
      child.unref();
      resolve(true);
    });
  });
}
