/** Mean over the values that are there; NaN where none is. */
export function presentMean(values: Float32Array | Float64Array): number {
  let sum = 0;
  let count = 0;
  for (const value of values)
    if (!Number.isNaN(value)) {
      sum += value;
      count += 1;
    }
  return sum / count;
}

/**
 * Departures from the background, or without one from each row's zonal mean over the values that are there.
 *
 * @param values     Shape (rows, nLon), NaN missing. Not modified.
 * @param background Of the same shape; null = none.
 */
export function departures(
  values: Float32Array,
  background: Float32Array | null,
  nLon: number,
): Float32Array<ArrayBuffer> {
  const out = new Float32Array(values.length);
  for (let row = 0; row < values.length; row += nLon) {
    const mean = background === null ? presentMean(values.subarray(row, row + nLon)) : 0;
    for (let i = row; i < row + nLon; i++) out[i] = values[i] - (background === null ? mean : background[i]);
  }
  return out;
}
