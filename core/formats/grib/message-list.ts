import type { GribEntry, GridDefinition } from "./grib-index.ts";

/** Collects what a scan finds; a grid that comes again is kept once. */
export class MessageList {
  readonly grids: GridDefinition[] = [];
  readonly entries: GribEntry[] = [];
  readonly #places = new Map<string, number>();

  /** Index of a grid. */
  placeOf(grid: GridDefinition): number {
    const mark = JSON.stringify(grid);
    const held = this.#places.get(mark);
    if (held !== undefined) return held;
    this.#places.set(mark, this.grids.length);
    return this.grids.push(grid) - 1;
  }
}
