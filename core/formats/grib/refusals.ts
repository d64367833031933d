import type { LeftOut } from "../dataset.ts";

/** Reasons told for one variable. */
const MOST_REASONS = 8;

/** Refusals by variable and reason, in the order in which they are met. */
export class Refusals {
  readonly #counts = new Map<string, Map<string, number>>();

  add(variable: string, why: string): void {
    const reasons = this.#counts.get(variable) ?? new Map<string, number>();
    this.#counts.set(variable, reasons);
    reasons.set(why, (reasons.get(why) ?? 0) + 1);
  }

  list(file: string): LeftOut[] {
    return [...this.#counts].flatMap(([variable, reasons]) => {
      const all = [...reasons].map(([why, n]) => ({ file, variable, why: n === 1 ? why : `${why} (${n} messages)` }));
      const rest = all.length - MOST_REASONS;
      return rest <= 0
        ? all
        : [...all.slice(0, MOST_REASONS), { file, variable, why: `${rest} more reasons like these` }];
    });
  }
}
