import { spawn } from "node:child_process";
import { mkdtempSync, rmSync, writeFileSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { fileURLToPath, pathToFileURL } from "node:url";
import { build } from "vite";
import type { BatchIo } from "../../../app/batch/command.ts";

const ROOT = fileURLToPath(new URL("../../..", import.meta.url));

/** The batch command and its worker, built as `npm run batch` builds them, in a folder of the test's own. */
export interface BuiltBatch {
  readonly main: string;
  readonly workerUrl: URL;
  remove(): void;
}

export async function builtBatch(extra: Readonly<Record<string, string>> = {}): Promise<BuiltBatch> {
  const folder = mkdtempSync(join(tmpdir(), "isohypse-batch-"));
  await build({
    configFile: false,
    root: ROOT,
    logLevel: "error",
    ssr: { noExternal: true },
    build: {
      ssr: true,
      target: "node20",
      outDir: folder,
      emptyOutDir: true,
      rollupOptions: {
        input: { main: join(ROOT, "app/batch/main.ts"), worker: join(ROOT, "app/batch/worker.ts"), ...extra },
        output: { format: "es", entryFileNames: "[name].js", chunkFileNames: "[name]-[hash].js" },
      },
    },
  });
  writeFileSync(join(folder, "package.json"), '{ "type": "module" }');
  return {
    main: join(folder, "main.js"),
    workerUrl: pathToFileURL(join(folder, "worker.js")),
    remove: () => rmSync(folder, { recursive: true, force: true }),
  };
}

/** What a command said, and what it was given. */
export interface Said {
  readonly io: BatchIo;
  stdout: string;
  stderr: string;
}

export function listeningIo(workerUrl: URL, more: Partial<BatchIo> = {}): Said {
  const said: Said = {
    stdout: "",
    stderr: "",
    io: {
      stdout(text) {
        said.stdout += text;
      },
      stderr(text) {
        said.stderr += text;
      },
      showsProgress: false,
      signal: new AbortController().signal,
      workerUrl,
      cores: 2,
      ...more,
    },
  };
  return said;
}

/** Run the built command as a program of its own. */
export function program(
  main: string,
  args: readonly string[],
  onOutput: (text: string, kill: (signal: NodeJS.Signals) => void) => void = () => undefined,
): Promise<{ code: number | null; signal: string | null; stdout: string; stderr: string }> {
  return new Promise((resolve) => {
    const child = spawn(process.execPath, [main, ...args], { stdio: ["ignore", "pipe", "pipe"] });
    let stdout = "";
    let stderr = "";
    child.stdout.on("data", (part: Buffer) => {
      stdout += part;
      onOutput(stdout, (signal) => child.kill(signal));
    });
    child.stderr.on("data", (part: Buffer) => {
      stderr += part;
    });
    child.on("close", (code, signal) => resolve({ code, signal, stdout, stderr }));
  });
}
