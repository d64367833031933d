import { DataError } from "../../core/errors.ts";
import type { TaskProgress } from "./desk.ts";

const SOONEST = 500; // milliseconds; shorter work shows no progress
const APART = 100; // milliseconds between reports

/** A task under way. */
export interface Task {
  readonly signal: AbortSignal;
  report(title: string, done: number, secondsLeft: number | null): void;
}

/** The window's tasks: told how far they are, and cancelled by number. */
export class Tasks {
  readonly #running = new Map<number, AbortController>();
  #listener: ((progress: TaskProgress) => void) | null = null;
  readonly #now: () => number;

  constructor(now: () => number = Date.now) {
    this.#now = now;
  }

  listen(listener: (progress: TaskProgress) => void): void {
    this.#listener = listener;
  }

  cancel(number: number): void {
    this.#running.get(number)?.abort();
  }

  cancelAll(): void {
    for (const controller of this.#running.values()) controller.abort();
  }

  /** Run work as task `number`; a task of that number that is still running is cancelled. */
  async run<T>(number: number, work: (task: Task) => Promise<T>): Promise<T> {
    this.cancel(number);
    const controller = new AbortController();
    this.#running.set(number, controller);
    const started = this.#now();
    let last = started;
    let shown: string | null = null;
    const tell = (title: string, done: number, secondsLeft: number | null): void => {
      shown = title;
      this.#listener?.({ task: number, title, done, secondsLeft });
    };
    try {
      return await work({
        signal: controller.signal,
        report: (title, done, secondsLeft) => {
          const now = this.#now();
          if (now - started < SOONEST || now - last < APART) return;
          last = now;
          tell(title, Math.min(done, 0.999), secondsLeft);
        },
      });
    } catch (error) {
      if (controller.signal.aborted) throw new DataError("Cancelled", "The task was cancelled.");
      throw error;
    } finally {
      if (this.#running.get(number) === controller) this.#running.delete(number);
      // The end is told of every task whose progress was, so that nothing stays on the screen.
      if (shown !== null) tell(shown, 1, 0);
    }
  }
}
