/** Edits (insert, drop, replace) that turn `a` into `b`: Levenshtein 1966. */
function editDistance(a: string, b: string): number {
  let row = Array.from({ length: b.length + 1 }, (_, j) => j);
  for (let i = 1; i <= a.length; i++) {
    const next = [i];
    for (let j = 1; j <= b.length; j++)
      next[j] = Math.min(row[j] + 1, next[j - 1] + 1, row[j - 1] + (a[i - 1] === b[j - 1] ? 0 : 1));
    row = next;
  }
  return row[b.length];
}

/** The known word that `word` was probably meant to be: at most a third of its letters differ. null if none is near. */
export function nearestWord(word: string, known: readonly string[]): string | null {
  const wanted = word.toLowerCase().slice(0, 80);
  let best: string | null = null;
  let fewest = Math.max(1, Math.floor(wanted.length / 3));
  for (const candidate of known) {
    const edits = editDistance(wanted, candidate.toLowerCase());
    if (edits < fewest || (edits === fewest && best === null)) {
      best = candidate;
      fewest = edits;
    }
  }
  return best;
}
