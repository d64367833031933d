import * as Comlink from "comlink";
import type { FromWorker } from "../../core/recipe/crew-line.ts";
import { WorkerCrew } from "../../core/recipe/worker-crew.ts";
import { version } from "../../package.json";
import type { Desk } from "./desk.ts";
import { openDeskFile } from "./desk-file.ts";
import { type DeskFile, DeskService } from "./desk-service.ts";

const MOST_WORKERS = 2; // beside this one and the window itself

const crew = new WorkerCrew<DeskFile>(
  Math.max(1, Math.min(MOST_WORKERS, (navigator.hardwareConcurrency || 2) - 1)),
  (events) => {
    const worker = new Worker(new URL("./chunk-worker.ts", import.meta.url), { type: "module" });
    worker.onmessage = ({ data }: MessageEvent<FromWorker>) => events.message(data);
    let gone = false;
    const died = (words: string): void => {
      if (gone) return;
      gone = true;
      worker.terminate();
      events.died(words);
    };
    worker.onerror = (event) => died(event.message || "it could not be loaded");
    worker.onmessageerror = () => died("a message from it could not be read");
    return {
      post: (message) => worker.postMessage(message),
      end() {
        gone = true;
        worker.terminate();
      },
    };
  },
);

const service = new DeskService({ open: openDeskFile, crew, program: `Isohypse ${version}` });

/** The buffers of arrays, each once. */
function buffers(arrays: readonly (ArrayBufferView | null | undefined)[]): ArrayBuffer[] {
  return [...new Set(arrays.flatMap((array) => (array ? [array.buffer as ArrayBuffer] : [])))];
}

// Numbers are handed over, not copied. Coordinates stay: they are the open files' own.
const desk: Desk = {
  open: (sources, corrections) => service.open(sources, corrections),
  correct: (file, corrections) => service.correct(file, corrections),
  close: (file) => service.close(file),
  prepareBackground: (place, background, task) => service.prepareBackground(place, background, task),
  async frame(place, time, background) {
    const frame = await service.frame(place, time, background);
    return Comlink.transfer(frame, buffers([frame.values, frame.background]));
  },
  async ribbon(place, band, times, background, task) {
    const ribbon = await service.ribbon(place, band, times, background, task);
    return Comlink.transfer(ribbon, buffers([ribbon.values, ribbon.background]));
  },
  async runRecipe(recipe, task) {
    const outcome = await service.runRecipe(recipe, task);
    const arrays = outcome.results.flatMap((result) =>
      result.variables.flatMap(({ data, reasons }) => [data, reasons]),
    );
    const axes = new Set(
      outcome.results.flatMap((result) => result.coordinates.map(({ values }) => values.buffer as ArrayBuffer)),
    );
    return Comlink.transfer(
      outcome,
      buffers(arrays).filter((buffer) => !axes.has(buffer)),
    );
  },
  onProgress: (callback) => service.onProgress(callback),
  cancel: (task) => service.cancel(task),
};

Comlink.expose({ ...desk, ping: () => true });
