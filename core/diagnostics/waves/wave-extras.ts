import { RADIANS_PER_DEGREE } from "../../constants.ts";
import { reasonCode } from "../../field/reasons.ts";
import { nearestColumn } from "../../grid/rows.ts";
import { realTransform } from "../../transforms/fourier/fourier.ts";
import type { Coordinate, ResultVariable } from "../entry.ts";
import { isNyquist, ridgeLongitude, waveAmplitude } from "./coefficients.ts";
import type { WaveFrame } from "./wave-frame.ts";

const EACH = ["time", "level", "row", "wavenumber"] as const;
const MISSING = reasonCode("missing");

/**
 * Interference of the anomaly's waves with the background's stationary ones.
 *
 * Zonal covariance 2 Re(c_k^anom · conj c_k^clim) (once for the Nyquist wave); in the variance of their sum it counts twice.
 * Source: Smith & Kushner 2012, J. Geophys. Res.
 */
export function interferenceVariables(
  frame: WaveFrame,
  anomaly: Float64Array,
  background: Float64Array,
): ResultVariable[] {
  const { waves, nLon, choice } = frame;
  const kept = choice.most + 1;
  const rows = anomaly.length / (2 * kept);
  const size = rows * waves.length;
  const covariance = frame.array(size);
  const angle = frame.array(size);
  const amplitude = frame.array(size);
  const ridge = frame.array(size);
  const reasons = new Uint8Array(size);
  const backgroundReasons = new Uint8Array(size);
  for (let r = 0, at = 0; r < rows; r++) {
    for (const k of waves) {
      const i = 2 * (r * kept + k);
      const [ar, ai, br, bi] = [anomaly[i], anomaly[i + 1], background[i], background[i + 1]] as [
        number,
        number,
        number,
        number,
      ];
      const re = ar * br + ai * bi;
      covariance[at] = (isNyquist(k, nLon) ? 1 : 2) * re;
      angle[at] = Math.atan2(ai * br - ar * bi, re) / RADIANS_PER_DEGREE;
      amplitude[at] = waveAmplitude(br, bi, k, nLon);
      ridge[at] = ridgeLongitude(br, bi, k);
      if (Number.isNaN(re)) reasons[at] = MISSING;
      if (Number.isNaN(br)) backgroundReasons[at] = MISSING;
      at += 1;
    }
  }
  const { units } = frame.series;
  return [
    frame.variable(
      "interference",
      "Zonal covariance of the anomaly's wave with the background's",
      squared(units),
      EACH,
      covariance,
      reasons,
    ),
    frame.variable(
      "interference_phase",
      "Phase of the anomaly's wave less the background's",
      "degrees",
      EACH,
      angle,
      reasons,
    ),
    frame.variable(
      "background_amplitude",
      "Amplitude of the background's wave",
      units,
      EACH,
      amplitude,
      backgroundReasons,
    ),
    frame.variable(
      "background_ridge_longitude",
      "Ridge longitude of the background's wave",
      "degrees_east",
      EACH,
      ridge,
      backgroundReasons,
    ),
  ];
}

function squared(units: string): string {
  return units
    .split(" ")
    .map((unit) => {
      const match = /^([a-zA-Z]+)(-?\d+)?$/.exec(unit);
      return match === null ? unit : `${match[1]}${2 * Number(match[2] ?? 1)}`;
    })
    .join(" ");
}

/** x = Σ over the chosen waves of A_k cos k(λ − λ_k), wave 0 being the zonal mean, on the grid's longitudes. */
export function reconstructionVariable(
  frame: WaveFrame,
  c: Float64Array,
): { variable: ResultVariable; longitude: Coordinate } {
  const { choice, nLon, series } = frame;
  const { lon } = series.grid;
  const chosen = choice.reconstruct ?? [];
  const kept = choice.most + 1;
  const rows = c.length / (2 * kept);
  const start = (lon[0] as number) * RADIANS_PER_DEGREE;
  const turned = new Float64Array(c.length);
  for (let r = 0; r < rows; r++) {
    for (const k of chosen) {
      const i = 2 * (r * kept + k);
      const re = c[i] as number;
      const im = c[i + 1] as number;
      const cos = Math.cos(k * start);
      const sin = Math.sin(k * start);
      turned[i] = re * cos - im * sin;
      turned[i + 1] = re * sin + im * cos;
    }
  }
  const out = new Float64Array(rows * nLon);
  realTransform(nLon).inverse(turned, rows, out, kept);
  const reasons = new Uint8Array(out.length);
  for (let i = 0; i < out.length; i++) if (Number.isNaN(out[i])) reasons[i] = MISSING;
  return {
    variable: frame.variable(
      "reconstruction",
      `Field of waves ${chosen.join(", ")}`,
      series.units,
      ["time", "level", "row", "longitude"],
      out,
      reasons,
    ),
    longitude: {
      name: "longitude",
      values: lon.slice(),
      units: "degrees_east",
      attributes: { standard_name: "longitude" },
    },
  };
}

/**
 * The share of each wave 0 … waves in a value on a row, A_k cos k(λ₀ − λ_k), and what the shorter waves add.
 *
 * @param row    Values along the circle.
 * @param column The point.
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
    const real = (c[shift + 2 * k] as number) * Math.cos(angle) - (c[shift + 2 * k + 1] as number) * Math.sin(angle);
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
  const lon = series.grid.lon[nearestColumn(series.grid.lon, choice.point?.[1] ?? 0)] as number;
  const each = waves + 2;
  const out = new Float64Array(values.length * each);
  const reasons = new Uint8Array(out.length);
  for (let s = 0; s < values.length; s++)
    out.set(sharesAt(c, 2 * s * (waves + 1), lon, values[s] as number, waves, nLon), s * each);
  for (let i = 0; i < out.length; i++) if (Number.isNaN(out[i])) reasons[i] = MISSING;
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
