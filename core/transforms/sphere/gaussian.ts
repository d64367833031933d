/** Gaussian latitudes as sines, south → north, and their weights, which sum to 2. */
export interface GaussianRows {
  readonly sines: Float64Array;
  readonly weights: Float64Array;
}

/**
 * Nodes and weights of Gauss–Legendre quadrature by Newton's method on P_J.
 *
 * Source: Abramowitz & Stegun 1964, 25.4.29; first guesses cos(π(j − ¼)/(J + ½)) as common practice.
 */
export function gaussianRows(count: number): GaussianRows {
  const sines = new Float64Array(count);
  const weights = new Float64Array(count);
  for (let j = 0; j < Math.ceil(count / 2); j++) {
    let x = Math.cos((Math.PI * (j + 0.75)) / (count + 0.5));
    let slope = 1;
    for (let round = 0; round < 100; round++) {
      let p = 1;
      let before = 0;
      for (let n = 1; n <= count; n++) [p, before] = [((2 * n - 1) * x * p - (n - 1) * before) / n, p];
      slope = (count * (x * p - before)) / (x * x - 1);
      const step = p / slope;
      x -= step;
      if (Math.abs(step) <= 2 ** -52) break;
    }
    const weight = 2 / ((1 - x * x) * slope * slope);
    const isMiddle = 2 * j + 1 === count;
    sines[count - 1 - j] = isMiddle ? 0 : x;
    sines[j] = isMiddle ? 0 : -x;
    weights[j] = weight;
    weights[count - 1 - j] = weight;
  }
  return { sines, weights };
}
