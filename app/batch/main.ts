import { availableParallelism } from "node:os";
import { run } from "./command.ts";

const controller = new AbortController();
// The first Ctrl+C lets the chunks under way end and leaves no half file; a second one, with the handler gone, kills.
process.once("SIGINT", () => controller.abort());
process.once("SIGTERM", () => controller.abort());

process.exitCode = await run(process.argv.slice(2), {
  stdout: (text) => process.stdout.write(text),
  stderr: (text) => process.stderr.write(text),
  showsProgress: process.stderr.isTTY === true,
  signal: controller.signal,
  workerUrl: new URL("./worker.js", import.meta.url),
  cores: availableParallelism(),
});
