/**
 * Why a number is missing or needs care. One byte per number in every result;
 * code 0 is a plain valid number. `value` says whether a number stands there all the same.
 */
export const REASONS = [
  { code: 0, key: "valid", value: true, words: "valid" },
  { code: 1, key: "missing", value: false, words: "missing data" },
  { code: 2, key: "equator", value: false, words: "too near the equator" },
  { code: 3, key: "easterlies", value: false, words: "easterlies" },
  { code: 4, key: "pole", value: false, words: "too near the pole" },
  { code: 5, key: "short", value: false, words: "too short a record" },
  { code: 6, key: "ambiguous", value: true, words: "ambiguous" },
  { code: 7, key: "small", value: false, words: "amplitude too small" },
  { code: 8, key: "no_time", value: false, words: "the record axis is not a time" },
  { code: 9, key: "edge", value: false, words: "too near the record's end" },
] as const;

export type ReasonKey = (typeof REASONS)[number]["key"];

/** Byte that stands for `key` in a mask. */
export function reasonCode(key: ReasonKey): number {
  return REASONS.find((reason) => reason.key === key)?.code ?? 0;
}
