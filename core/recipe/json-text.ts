import { DataError } from "../errors.ts";

export type Json = null | boolean | number | string | readonly Json[] | { readonly [key: string]: Json };

/** A JSON text read so that every value can be found again by line. */
export interface JsonText {
  readonly value: Json;
  /** Line (from 1) of each value, by its path: `""`, `results`, `results[0].waves`. */
  readonly lines: ReadonlyMap<string, number>;
}

const DEEPEST = 64;
const NUMBER = /-?(?:0|[1-9]\d*)(?:\.\d+)?(?:[eE][+-]?\d+)?/y;
const BLANK = /[ \t\r\n]*/y;
// A string's inside, up to its closing quote: no raw control characters (RFC 8259, section 7).
// biome-ignore lint/suspicious/noControlCharactersInRegex: they are what must be refused
const STRING = /"(?:[^"\\\u0000-\u001f]|\\(?:["\\/bfnrt]|u[0-9a-fA-F]{4}))*"/y;

/** Path of a member; keys that are no plain words are quoted. */
export function memberPath(path: string, key: string | number): string {
  if (typeof key === "number") return `${path}[${key}]`;
  const name = /^[A-Za-z_][\w-]*$/.test(key) ? key : JSON.stringify(key);
  return path === "" ? name : `${path}.${name}`;
}

/** One pass over a JSON text (RFC 8259); JSON.parse would not tell where a value stands. */
class JsonScan {
  readonly lines = new Map<string, number>();
  readonly #text: string;
  #at = 0;
  #line = 1;
  #counted = 0;

  constructor(text: string) {
    this.#text = text;
  }

  whole(): Json {
    const value = this.#value("", 0);
    this.#blank();
    if (this.#at < this.#text.length) this.#fail("nothing more may follow the closing bracket");
    return value;
  }

  #currentLine(): number {
    for (; this.#counted < this.#at; this.#counted++) if (this.#text[this.#counted] === "\n") this.#line += 1;
    return this.#line;
  }

  #fail(expected: string): never {
    const found = this.#at >= this.#text.length ? "the text ends" : `found ${JSON.stringify(this.#text[this.#at])}`;
    throw new DataError("RecipeError", `line ${this.#currentLine()}: not JSON: ${found}, but ${expected}.`);
  }

  #blank(): void {
    BLANK.lastIndex = this.#at;
    BLANK.test(this.#text);
    this.#at = BLANK.lastIndex;
  }

  #match(pattern: RegExp): string | null {
    pattern.lastIndex = this.#at;
    const found = pattern.exec(this.#text);
    if (found === null) return null;
    this.#at = pattern.lastIndex;
    return found[0];
  }

  #skip(character: string): boolean {
    this.#blank();
    if (this.#text[this.#at] !== character) return false;
    this.#at += 1;
    return true;
  }

  #value(path: string, depth: number): Json {
    this.#blank();
    this.lines.set(path, this.#currentLine());
    if (depth > DEEPEST) this.#fail(`brackets may be at most ${DEEPEST} deep`);
    const first = this.#text[this.#at];
    if (first === "{") return this.#object(path, depth);
    if (first === "[") return this.#array(path, depth);
    if (first === '"') return this.#string();
    for (const [word, value] of [
      ["true", true],
      ["false", false],
      ["null", null],
    ] as const) {
      if (this.#text.startsWith(word, this.#at)) {
        this.#at += word.length;
        return value;
      }
    }
    const number = this.#match(NUMBER);
    if (number === null) this.#fail("a value is wanted: text in double quotes, a number, a list or an object");
    return Number(number);
  }

  #string(): string {
    const text = this.#match(STRING);
    if (text === null) this.#fail("a text in double quotes that closes on its line is wanted");
    return JSON.parse(text) as string;
  }

  #array(path: string, depth: number): Json[] {
    this.#at += 1;
    const list: Json[] = [];
    if (this.#skip("]")) return list;
    do list.push(this.#value(memberPath(path, list.length), depth + 1));
    while (this.#skip(","));
    if (!this.#skip("]")) this.#fail("a list goes on with a comma or ends with ]");
    return list;
  }

  #object(path: string, depth: number): { [key: string]: Json } {
    this.#at += 1;
    const entries = new Map<string, Json>();
    if (this.#skip("}")) return {};
    do {
      this.#blank();
      if (this.#text[this.#at] !== '"') this.#fail("a key in double quotes is wanted");
      const key = this.#string();
      if (entries.has(key)) this.#fail(`the key ${JSON.stringify(key)} may stand only once in an object`);
      if (!this.#skip(":")) this.#fail("a colon follows a key");
      entries.set(key, this.#value(memberPath(path, key), depth + 1));
    } while (this.#skip(","));
    if (!this.#skip("}")) this.#fail("an object goes on with a comma or ends with }");
    // fromEntries defines own properties, so a key like __proto__ stays a key.
    return Object.fromEntries(entries);
  }
}

/**
 * Read a JSON text with the line of every value.
 *
 * @throws RecipeError naming the line where the text stops being JSON.
 */
export function jsonText(text: string): JsonText {
  const scan = new JsonScan(text.replace(/^\uFEFF/, ""));
  const value = scan.whole();
  return { value, lines: scan.lines };
}
