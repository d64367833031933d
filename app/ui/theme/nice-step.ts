/** Steps that read well, times a power of ten. */
const NICE = [1, 1.5, 2, 2.5, 3, 4, 5, 6, 8, 10];
/** Values that the step is found from, at most; a longer record is sampled evenly. */
const ENOUGH_VALUES = 200_000;
/** Share of the values that must fall within the ramp. */
const COVERED = 0.99;
/** Steps from zero to the middle of the last of the ramp's seven bands. */
const RAMP_REACH = 7.5;

/** The smallest nice number that is at least `least`; 1 where there is no such number. */
export function niceStep(least: number): number {
  if (!(least > 0) || !Number.isFinite(least)) return 1;
  const power = 10 ** Math.floor(Math.log10(least));
  const found = NICE.find((nice) => nice * power >= least * (1 - 1e-9)) ?? 10;
  return Number((found * power).toPrecision(6));
}

/**
 * The shading's step for a record: such that all but the outermost hundredth of the values fall within the seven bands.
 *
 * Set once per record, never per picture, so that colours mean the same all the way through.
 *
 * @param values Departures, centred on zero; NaN is missing. Not modified.
 */
export function shadingStep(values: Float32Array | Float64Array): number {
  const stride = Math.max(1, Math.ceil(values.length / ENOUGH_VALUES));
  const sizes = new Float64Array(Math.ceil(values.length / stride));
  let n = 0;
  for (let i = 0; i < values.length; i += stride) {
    const size = Math.abs(values[i] as number);
    if (!Number.isNaN(size)) sizes[n++] = size;
  }
  if (n === 0) return 1;
  const sorted = sizes.subarray(0, n).sort();
  return niceStep((sorted[Math.ceil(COVERED * n) - 1] as number) / RAMP_REACH);
}
