/** How far a run is. */
export interface RunProgress {
  /** The result being made. */
  readonly title: string;
  /** 0 to 1. */
  readonly done: number;
  /** null while it cannot be told. */
  readonly secondsLeft: number | null;
}

const EARLIEST = 0.5; // seconds of work before the time left is worth saying

/** Counts work done, in numbers read, against all that is planned. */
export class WorkMeter {
  readonly #report: ((progress: RunProgress) => void) | undefined;
  readonly #now: () => number;
  readonly #started: number;
  #total = 0;
  #done = 0;
  title = "";

  /** @param now Milliseconds. */
  constructor(report: ((progress: RunProgress) => void) | undefined, now: () => number = Date.now) {
    this.#report = report;
    this.#now = now;
    this.#started = now();
  }

  plan(work: number): void {
    this.#total += work;
  }

  add(work: number): void {
    this.#done += work;
    const done = this.#total > 0 ? Math.min(1, this.#done / this.#total) : 1;
    const seconds = (this.#now() - this.#started) / 1000;
    const secondsLeft = seconds < EARLIEST || done === 0 ? null : (seconds * (1 - done)) / done;
    this.#report?.({ title: this.title, done, secondsLeft });
  }
}
