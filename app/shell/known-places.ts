import { mkdir, readFile, rename, writeFile } from "node:fs/promises";
import { dirname, join } from "node:path";

const MOST_PLACES = 2000;

/**
 * Paths that the user opened at some time, by dialog or command line. A window may ask for these again by path
 * (a restored case does) and for no others, so that a page gone wrong cannot read the disk.
 */
export class KnownPlaces {
  readonly #path: string;
  #places: Promise<Set<string>>;
  #last: Promise<void> = Promise.resolve();

  constructor(folder: string) {
    this.#path = join(folder, "places.json");
    this.#places = readFile(this.#path, "utf8").then(
      (text) => new Set(placesIn(text)),
      () => new Set(),
    );
  }

  async has(place: string): Promise<boolean> {
    return (await this.#places).has(place);
  }

  /** Remember paths; a folder that cannot be written only means that they are forgotten at the next start. */
  async add(places: readonly string[]): Promise<void> {
    const known = await this.#places;
    const fresh = places.filter((place) => !known.has(place));
    if (fresh.length === 0) return;
    for (const place of fresh) known.add(place);
    const text = JSON.stringify([...known].slice(-MOST_PLACES));
    this.#last = this.#last.then(() => this.#replace(text)).catch(() => undefined);
    await this.#last;
  }

  async #replace(text: string): Promise<void> {
    await mkdir(dirname(this.#path), { recursive: true });
    const temporary = `${this.#path}.${process.pid}.new`;
    await writeFile(temporary, text);
    await rename(temporary, this.#path);
  }
}

function placesIn(text: string): string[] {
  try {
    const list: unknown = JSON.parse(text);
    return Array.isArray(list) ? list.filter((place) => typeof place === "string") : [];
  } catch {
    return [];
  }
}
