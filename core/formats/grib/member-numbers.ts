import type { GribEntry } from "./grib-index.ts";

/** Which numbers mean members among messages of one parameter, and which are no more than a default. */
export class MemberNumbers {
  readonly #isEnsemble: boolean;
  readonly #hasSureControl: boolean;
  /** Numbers that a negative and a positive perturbation share. */
  readonly #shared: ReadonlySet<number>;

  constructor(entries: readonly GribEntry[]) {
    const marks = entries.flatMap(({ member }) => (member === null ? [] : [member]));
    this.#isEnsemble = marks.some(({ number, isSure }) => isSure || number > 0);
    this.#hasSureControl = marks.some(({ number, isSure }) => isSure && number === 0);
    const positive = new Set(marks.filter(({ isNegative }) => !isNegative).map(({ number }) => number));
    this.#shared = new Set(
      marks.filter(({ number, isNegative }) => isNegative && positive.has(number)).map(({ number }) => number),
    );
  }

  /** Number of the member that a message belongs to; negative perturbations below 0 where positive ones have their numbers. */
  of({ member }: GribEntry): number | null {
    if (member === null || !this.#isEnsemble) return null;
    const { number, isSure, isNegative } = member;
    // A deterministic forecast beside an ensemble with its own control is no second control.
    if (!isSure && number === 0 && this.#hasSureControl) return null;
    return isNegative && this.#shared.has(number) ? -number : number;
  }
}
