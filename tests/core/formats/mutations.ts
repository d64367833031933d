/** Seeded numbers in [0, 1): mulberry32 (T. Ettinger, public domain). */
export function seeded(seed: number): () => number {
  let state = seed;
  return () => {
    state = (state + 0x6d2b79f5) | 0;
    let t = Math.imul(state ^ (state >>> 15), 1 | state);
    t = (t + Math.imul(t ^ (t >>> 7), 61 | t)) ^ t;
    return ((t ^ (t >>> 14)) >>> 0) / 2 ** 32;
  };
}

/** Values that break counts, offsets and sizes: all bits set, sign bits, huge, one less, nothing. */
const WORDS = [0xffffffff, 0x80000000, 0x7fffffff, 0x40000000, 0x10000000, 0x00ffffff, 1_000_000, 65_536, 0, 1, 2, 5];

/**
 * A file damaged in up to four places, and sometimes cut short.
 *
 * @param where Whether the first bytes, where headers are, are hit most, or all alike.
 */
export function mutated(base: Uint8Array, random: () => number, where: "start" | "anywhere"): Uint8Array {
  const bytes = base.slice();
  const upTo = (n: number) => Math.floor(random() * n);
  const reach = where === "anywhere" ? bytes.length : Math.min(bytes.length, 4 + upTo(3) * 700 + 500);
  const changes = 1 + upTo(4);
  for (let i = 0; i < changes; i++) {
    const kind = random();
    const word = 4 * upTo(Math.floor(reach / 4) - 1);
    if (kind < 0.5) {
      const value = WORDS[upTo(WORDS.length)] as number;
      new DataView(bytes.buffer).setUint32(Math.max(4, word), value, random() < 0.5);
    } else if (kind < 0.8) bytes[4 + upTo(reach - 4)] = upTo(256);
    else if (kind < 0.9) bytes.copyWithin(word, 4 * upTo(Math.floor(reach / 4)), Math.min(reach, word + 64));
    else bytes[upTo(4)] = upTo(6);
  }
  return random() < 0.3 ? bytes.slice(0, upTo(bytes.length)) : bytes;
}
