/** What a chart keeps from one picture to the next: each thing in its slot, until what it was made from changes. */
export class ChartMemory {
  readonly #slots = new Map<string, { readonly key: string; readonly value: unknown }>();
  readonly #numbers = new WeakMap<object, number>();
  #given = 0;

  /** A number of its own for each object, so that arrays are told apart without being read. */
  #numberOf(thing: object): number {
    let number = this.#numbers.get(thing);
    if (number === undefined) {
      number = this.#given++;
      this.#numbers.set(thing, number);
    }
    return number;
  }

  /**
   * The slot's value, made anew if one of its parts is not what it was.
   *
   * @param make Is given the old value, whose canvases may be drawn over.
   */
  kept<T>(slot: string, parts: readonly unknown[], make: (old: T | undefined) => T): T {
    const key = parts
      .map((part) => (typeof part === "object" && part !== null ? `#${this.#numberOf(part)}` : String(part)))
      .join("|");
    const held = this.#slots.get(slot);
    if (held?.key === key) return held.value as T;
    const value = make(held?.value as T | undefined);
    this.#slots.set(slot, { key, value });
    return value;
  }
}

/** A new canvas, or the old one cleared if it has the size. */
export function clearCanvas(old: HTMLCanvasElement | undefined, width: number, height: number): HTMLCanvasElement {
  const canvas = old ?? document.createElement("canvas");
  if (canvas.width !== width || canvas.height !== height) {
    canvas.width = width;
    canvas.height = height;
  } else {
    const context = canvas.getContext("2d") as CanvasRenderingContext2D;
    context.setTransform(1, 0, 0, 1, 0, 0);
    context.clearRect(0, 0, width, height);
  }
  return canvas;
}
