import { DataError } from "../../errors.ts";

export const SHORTEST = 8;
export const LONGEST = 2880;

/** Radices of a length, in the order in which the stages run: fours first, then the primes. */
export function radices(n: number): number[] {
  const found: number[] = [];
  let rest = n;
  while (rest % 4 === 0) {
    found.push(4);
    rest /= 4;
  }
  for (let p = 2; rest > 1; p++) {
    while (rest % p === 0) {
      found.push(p);
      rest /= p;
    }
    if (p * p > rest && rest > 1) {
      found.push(rest);
      break;
    }
  }
  return found;
}

/** e^{−2πik/n} for k = 0 … n − 1, interleaved; each angle is brought into the first eighth of the circle, so that symmetric entries agree to the bit. */
export function twiddles(n: number): Float64Array {
  const table = new Float64Array(2 * n);
  for (let k = 0; k < n; k++) {
    // Eighths of the circle, counted exactly in whole numbers: k/n = eighth/8 + rest/(8n).
    const eighth = Math.floor((8 * k) / n);
    const rest = 8 * k - eighth * n;
    const folded = eighth % 2 === 0 ? rest : n - rest;
    const angle = (Math.PI * folded) / (4 * n);
    // At 45° the two are one number, but a library rounds them apart.
    const c = folded === n ? Math.SQRT1_2 : Math.cos(angle);
    const s = folded === n ? Math.SQRT1_2 : Math.sin(angle);
    const [x, y] = eighth % 4 === 0 || eighth % 4 === 3 ? [c, s] : [s, c];
    table[2 * k] = eighth >= 2 && eighth < 6 ? -x : x;
    table[2 * k + 1] = eighth < 4 ? -y : y;
  }
  return table;
}

/** @throws ShapeError for a length that is not transformed here. */
export function requireLength(n: number): void {
  if (!Number.isInteger(n) || n < SHORTEST || n > LONGEST)
    throw new DataError(
      "ShapeError",
      `A row of ${n} values cannot be transformed: lengths from ${SHORTEST} to ${LONGEST} can.`,
    );
}

/** How many transforms of a kernel's inner, complex kind a real row needs: half its length where that is whole. */
export function innerLength(n: number): number {
  return n % 2 === 0 ? n / 2 : n;
}
