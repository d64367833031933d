import { Worker } from "node:worker_threads";
import type { Correction } from "../../core/formats/dataset.ts";
import type { FromWorker, StartWorker } from "../../core/recipe/crew-line.ts";

/** What a batch worker opens. */
export interface BatchFile {
  readonly path: string;
  readonly corrections: readonly Correction[];
}

// Numbers live outside this heap; it holds code, headers and messages.
const HEAP_MEGABYTES = 512;

/** Starts worker_threads from `url`. */
export function threadStarter(url: URL): StartWorker<BatchFile> {
  return (events) => {
    let gone = false;
    const died = (words: string): void => {
      if (gone) return;
      gone = true;
      events.died(words);
    };
    const worker = new Worker(url, { resourceLimits: { maxOldGenerationSizeMb: HEAP_MEGABYTES } });
    worker.on("message", (message: FromWorker) => events.message(message));
    worker.on("messageerror", (error) => died(error.message));
    worker.on("error", (error: Error) => died(error.message));
    worker.on("exit", (code) => died(`it ended with code ${code}`));
    return {
      post: (message) => worker.postMessage(message),
      end() {
        gone = true;
        void worker.terminate();
      },
    };
  };
}
