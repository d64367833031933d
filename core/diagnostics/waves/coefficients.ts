import { RADIANS_PER_DEGREE } from "../../constants.ts";
import { realTransform } from "../../transforms/fourier/fourier.ts";

/** Zonal Fourier coefficients of some rows, for waves 0 … waves. */
export interface RowCoefficients {
  /** c_k = (1/N) Σ x(λ_n) e^{−ikλ_n} with the true λ_n; shape (rows, waves + 1, 2). NaN for a row that misses a value. */
  readonly c: Float64Array<ArrayBuffer>;
  /** Variance of each row about its own mean, (1/N) Σ (x − [x])²; shape (rows). */
  readonly variance: Float64Array<ArrayBuffer>;
}

/**
 * Coefficients of rows that go once round the circle.
 *
 * The transform counts longitude from the first column; turning by e^{−ikλ_0} puts 0° where it belongs. Each row's first
 * value is taken off before and given back to the mean after: heights are 50 times their waves, and the sums keep that much
 * more of their last digits.
 *
 * @param x     Shape (rows, nLon). Not modified.
 * @param lon   Degrees east, evenly spaced, closing the circle.
 * @param waves Largest wavenumber, at most nLon/2.
 * @throws ShapeError as the transform does.
 */
export function rowCoefficients(x: Float64Array, lon: Float64Array, waves: number): RowCoefficients {
  const n = lon.length;
  const rows = x.length / n;
  const kept = waves + 1;
  const variance = new Float64Array(rows);
  const c = new Float64Array(rows * kept * 2);
  realTransform(n).departures(x, rows, c, kept, variance);
  const turns = new Float64Array(2 * kept);
  const start = (lon[0] as number) * RADIANS_PER_DEGREE;
  for (let k = 0; k < kept; k++) {
    turns[2 * k] = Math.cos(k * start) / n;
    turns[2 * k + 1] = -Math.sin(k * start) / n;
  }
  for (let r = 0; r < rows; r++) {
    const at = 2 * r * kept;
    const mean = c[at] / n;
    for (let k = 0; k < kept; k++) {
      const re = c[at + 2 * k] as number;
      const im = c[at + 2 * k + 1] as number;
      const wr = turns[2 * k] as number;
      const wi = turns[2 * k + 1] as number;
      c[at + 2 * k] = re * wr - im * wi;
      c[at + 2 * k + 1] = re * wi + im * wr;
    }
    c[at] = mean + (x[r * n] as number);
    c[at + 1] = Number.isNaN(c[at]) ? Number.NaN : 0;
  }
  return { c, variance };
}

/** True for the wave whose crests lie two columns apart: it has no phase of its own, and its amplitude is |c|, not 2|c|. */
export function isNyquist(k: number, nLon: number): boolean {
  return 2 * k === nLon;
}

/** A_k = 2|c_k|; |c_k| for the mean and the Nyquist wave. */
export function waveAmplitude(re: number, im: number, k: number, nLon: number): number {
  return (k === 0 || isNyquist(k, nLon) ? 1 : 2) * Math.sqrt(re * re + im * im);
}

/** Ridge longitude −arg(c_k)/k in degrees east, in [0, 360/k); NaN for a wave of nothing. */
export function ridgeLongitude(re: number, im: number, k: number): number {
  return re === 0 && im === 0 ? Number.NaN : ridgeOfAngle(Math.atan2(im, re), k);
}

/** Ridge longitude of a coefficient's argument in radians, in degrees east, in [0, 360/k). */
export function ridgeOfAngle(angle: number, k: number): number {
  const cycle = 360 / k;
  const ridge = -angle / RADIANS_PER_DEGREE / k;
  return ridge < 0 ? (ridge + cycle < cycle ? ridge + cycle : 0) : ridge;
}
