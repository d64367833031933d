// Builds what is older than its sources: `node app/launch/build.mjs [tools] [window] [--force]`.
import { mkdir, readdir, stat, writeFile } from "node:fs/promises";
import { join } from "node:path";
import { fileURLToPath } from "node:url";

export const ROOT = fileURLToPath(new URL("../../", import.meta.url));
const SOURCES = ["core", "app", "package-lock.json", "electron.config.ts"];
const PARTS = {
  tools: { build: buildTools, sources: [...SOURCES, "sample-data"] },
  window: { build: buildWindow, sources: SOURCES },
};

/** Milliseconds of the newest file at or below `path`; 0 where there is none. */
async function newest(path) {
  const info = await stat(path).catch(() => null);
  if (info === null) return 0;
  if (!info.isDirectory()) return info.mtimeMs;
  const times = await Promise.all((await readdir(path)).map((name) => newest(join(path, name))));
  return Math.max(info.mtimeMs, ...times);
}

/** Bring the named parts up to date; says so on stderr when there is work. */
export async function ensureBuilt(parts, force = false) {
  for (const part of parts) {
    const stamp = join(ROOT, "out", `.built-${part}`);
    const built = await newest(stamp);
    const times = await Promise.all(PARTS[part].sources.map((source) => newest(join(ROOT, source))));
    if (!force && built > Math.max(...times)) continue;
    process.stderr.write(`Building the ${part} …\n`);
    const started = new Date();
    await PARTS[part].build();
    await mkdir(join(ROOT, "out"), { recursive: true });
    await writeFile(stamp, `${started.toISOString()}\n`);
  }
}

async function buildTools() {
  const { build } = await import("vite");
  await build({
    configFile: false,
    root: ROOT,
    logLevel: "warn",
    ssr: { noExternal: true, external: ["vite", "electron-vite"] },
    build: {
      ssr: true,
      target: "node20",
      outDir: join(ROOT, "out/tools"),
      emptyOutDir: true,
      minify: false,
      rollupOptions: {
        input: {
          "batch/main": join(ROOT, "app/batch/main.ts"),
          "batch/worker": join(ROOT, "app/batch/worker.ts"),
          "local/main": join(ROOT, "app/local/main.ts"),
          "sample/make": join(ROOT, "sample-data/make.ts"),
        },
        output: { format: "es", entryFileNames: "[name].js", chunkFileNames: "parts/[name]-[hash].js" },
      },
    },
  });
}

async function buildWindow() {
  const { build } = await import("electron-vite");
  await build({ root: ROOT, configFile: join(ROOT, "electron.config.ts"), logLevel: "warn" });
}

if (process.argv[1] === fileURLToPath(import.meta.url)) {
  const words = process.argv.slice(2);
  const parts = words.filter((word) => word in PARTS);
  await ensureBuilt(parts.length > 0 ? parts : Object.keys(PARTS), words.includes("--force"));
}
