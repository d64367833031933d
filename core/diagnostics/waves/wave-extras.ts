import { RADIANS_PER_DEGREE } from "../../constants.ts";
import type { Coordinate, ResultVariable } from "../entry.ts";
import { isNyquist } from "./coefficients.ts";
import type { WaveFrame } from "./wave-frame.ts";

/**
 * The share of each wave 0 … waves in a value on a row, A_k cos k(λ₀ − λ_k), and what the shorter waves add.
 *
 * @param c     Coefficients of the row for waves 0 … waves, real and imaginary in turn, from index `shift`.
 * @param lon   Degrees east of the point, one of the row's columns.
 * @param value What stands there.
 * @param nLon  Columns of the row.
 * @returns Shape (waves + 2); the last is `value` less the others.
 */
export function sharesAt(
  c: Float64Array,
  shift: number,
  lon: number,
  value: number,
  waves: number,
  nLon: number,
): Float64Array {
  const out = new Float64Array(waves + 2);
  let sum = 0;
  for (let k = 0; k <= waves; k++) {
    const angle = k * lon * RADIANS_PER_DEGREE;
    const real = c[shift + 2 * k] * Math.cos(angle) - c[shift + 2 * k + 1] * Math.sin(angle);
    const share = (k === 0 || isNyquist(k, nLon) ? 1 : 2) * real;
    out[k] = share;
    sum += share;
  }
  out[waves + 1] = value - sum;
  return out;
}

/** Shares at the chosen point at each step; the last entry is all shorter waves, so that each row adds up to the value there. */
export function shareVariable(
  frame: WaveFrame,
  c: Float64Array,
  values: Float64Array,
): { variable: ResultVariable; coordinate: Coordinate } {
  const { choice, series, nLon } = frame;
  const waves = choice.waves[1];
  const lon = series.grid.lon[choice.point?.column ?? 0];
  const each = waves + 2;
  const out = new Float64Array(values.length * each);
  const reasons = new Uint8Array(out.length);
  for (let s = 0; s < values.length; s++) {
    out.set(sharesAt(c, 2 * s * (waves + 1), lon, values[s], waves, nLon), s * each);
    if (Number.isNaN(out[s * each]))
      reasons.fill(frame.absence(s, choice.ofAnomaly, frame.nLevel), s * each, (s + 1) * each);
  }
  return {
    variable: frame.variable(
      "share",
      "Share of each wave in the value at the point",
      series.units,
      ["time", "level", "wave_or_rest"],
      out,
      reasons,
    ),
    coordinate: {
      name: "wave_or_rest",
      values: Float64Array.from({ length: each }, (_, k) => k),
      units: "1",
      attributes: { long_name: `zonal wavenumber; ${waves + 1} stands for all waves from there on together` },
    },
  };
}
