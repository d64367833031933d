/** Steps that read well: 1, 1.5, 2, 2.5, 3, 4, 5, 6, 8 times a power of ten. */
const NICE = [1, 1.5, 2, 2.5, 3, 4, 5, 6, 8, 10];

/** The smallest nice number that is at least `least`. */
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
 */
export function shadingStep(values: Float32Array | Float64Array): number {
  const sizes = Float64Array.from(
    values.filter((value) => !Number.isNaN(value)),
    Math.abs,
  ).sort();
  const size = sizes[Math.floor(0.99 * (sizes.length - 1))] ?? 0;
  return niceStep(size / 7.5);
}
