import { type FieldDescription, type FieldReader, filesOf } from "../../core/formats/dataset.ts";
import type { FieldPlace } from "./desk.ts";

const HELD_BYTES = 96 * 1024 * 1024;
const BLOCK_VALUES = 1 << 19; // read ahead at most 4 MB as 64-bit numbers: some milliseconds of decoding
const MOST_AHEAD = 8; // steps

interface Held {
  /** Files that it was read from. */
  readonly files: readonly string[];
  readonly values: Promise<Float32Array<ArrayBuffer>>;
  readonly bytes: number;
}

/** Single steps of a field on one level, the latest used kept, with the next ones read ahead in the direction of travel. */
export class FrameCache {
  /** By key, level and step; the latest used last. */
  readonly #held = new Map<string, Held>();
  #bytes = 0;
  #last: { readonly place: string; readonly time: number } | null = null;

  #key(place: FieldPlace, time: number): string {
    return JSON.stringify([place.key, place.member, place.level, time]);
  }

  /** Drop what was read of a file. */
  forget(file: string): void {
    for (const [key, { bytes, files }] of this.#held)
      if (files.includes(file)) {
        this.#held.delete(key);
        this.#bytes -= bytes;
      }
  }

  /** Values at a step, not to be modified: shape (nLat, nLon). */
  async frame(
    read: FieldReader,
    field: FieldDescription,
    place: FieldPlace,
    time: number,
  ): Promise<Float32Array<ArrayBuffer>> {
    const placeKey = JSON.stringify([place.key, place.member, place.level]);
    const travel = this.#last?.place === placeKey ? Math.sign(time - this.#last.time) : 0;
    this.#last = { place: placeKey, time };
    const held = this.#used(place, time) ?? this.#read(read, field, place, time, time + 1);
    const values = await held;
    const perStep = field.grid.lat.length * field.grid.lon.length;
    const ahead = Math.max(1, Math.min(MOST_AHEAD, Math.floor(BLOCK_VALUES / perStep)));
    this.#readAhead(read, field, place, time, travel < 0 ? -ahead : ahead);
    return values;
  }

  #used(place: FieldPlace, time: number): Promise<Float32Array<ArrayBuffer>> | null {
    const key = this.#key(place, time);
    const held = this.#held.get(key);
    if (held === undefined) return null;
    this.#held.delete(key);
    this.#held.set(key, held);
    return held.values;
  }

  #readAhead(read: FieldReader, field: FieldDescription, place: FieldPlace, time: number, steps: number): void {
    const next = time + Math.sign(steps);
    if (next < 0 || next >= field.steps.values.length || this.#held.has(this.#key(place, next))) return;
    const from = Math.max(0, steps > 0 ? next : time + steps);
    const to = Math.min(field.steps.values.length, steps > 0 ? next + steps : time);
    // What fails here fails again, in words, when it is asked for.
    this.#read(read, field, place, from, to).catch(() => undefined);
  }

  /** Read steps [from, to) in one go. @returns The first of them. */
  #read(
    read: FieldReader,
    field: FieldDescription,
    place: FieldPlace,
    from: number,
    to: number,
  ): Promise<Float32Array<ArrayBuffer>> {
    const perStep = field.grid.lat.length * field.grid.lon.length;
    const slab = read({ times: [from, to], levels: [place.level] });
    for (let time = from; time < to; time++) {
      const key = this.#key(place, time);
      if (this.#held.has(key)) continue;
      const start = (time - from) * perStep;
      const values = slab.then(({ data }) => Float32Array.from(data.subarray(start, start + perStep)));
      const held = { values, bytes: perStep * 4, files: filesOf(field) };
      values.catch(() => {
        // A failed read is not kept: the next asking tries anew.
        if (this.#held.get(key) === held) {
          this.#held.delete(key);
          this.#bytes -= held.bytes;
        }
      });
      this.#held.set(key, held);
      this.#bytes += held.bytes;
    }
    for (const [key, { bytes }] of this.#held) {
      if (this.#bytes <= HELD_BYTES) break;
      this.#held.delete(key);
      this.#bytes -= bytes;
    }
    return (
      (this.#held.get(this.#key(place, from)) as Held | undefined)?.values ??
      slab.then(({ data }) => Float32Array.from(data.subarray(0, perStep)))
    );
  }
}
