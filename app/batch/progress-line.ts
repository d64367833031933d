import type { RunProgress } from "../../core/recipe/progress.ts";

const SECONDS_APART = 0.1;

function duration(seconds: number): string {
  const whole = Math.ceil(seconds);
  if (whole < 60) return `${whole} s`;
  return whole < 3600 ? `${Math.round(whole / 60)} min` : `${(whole / 3600).toFixed(1)} h`;
}

/** One line on a terminal that is written over as the work goes on. */
export class ProgressLine {
  readonly #write: (text: string) => void;
  readonly #now: () => number;
  #last = Number.NEGATIVE_INFINITY;
  #shown = false;

  constructor(write: (text: string) => void, now: () => number = Date.now) {
    this.#write = write;
    this.#now = now;
  }

  show({ title, done, secondsLeft }: RunProgress): void {
    const now = this.#now() / 1000;
    if (now - this.#last < SECONDS_APART) return;
    this.#last = now;
    this.#shown = true;
    const left = secondsLeft === null ? "" : `, ${duration(secondsLeft)} left`;
    // ESC [K clears what a longer line left behind.
    this.#write(`\r${title}: ${Math.floor(done * 100)} %${left}\u001b[K`);
  }

  clear(): void {
    if (this.#shown) this.#write("\r\u001b[K");
    this.#shown = false;
  }
}
