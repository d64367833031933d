import { RADIANS_PER_DEGREE } from "../../constants.ts";
import { reasonCode } from "../../field/reasons.ts";

/** How a wave's ridge moves along the circle. */
export interface Drift {
  /** Degrees of longitude per day, east positive; NaN where it cannot be told. */
  readonly speed: number;
  /** Standard error of `speed`; NaN with fewer than three steps. */
  readonly error: number;
  /** Reason code, 0 = valid. */
  readonly reason: number;
}

const VALID = 0;
const MISSING = reasonCode("missing");
const SHORT = reasonCode("short");
const SMALL = reasonCode("small");
const AMBIGUOUS = reasonCode("ambiguous");
/** A ridge that moves over this share of half its own wavelength from one step to the next may as well have gone the other way. */
const AMBIGUOUS_SHARE = 0.8;

/** One wave at one place over the steps of the record: what its speeds are made from. */
export interface WavePath {
  /** |c|, shape (steps); NaN where the row misses a value. */
  readonly size: Float64Array;
  /** Ridge longitude, degrees, not unwrapped, shape (steps). */
  readonly ridge: Float64Array;
}

/**
 * Size and ridge of wave k at each step, written to `path`.
 *
 * @param c      Coefficients, step i at index 2i + shift.
 * @param angles Their arguments, radians, step i at index i + place.
 * @param nTime  Steps.
 */
export function fillWavePath(
  path: WavePath,
  c: Float64Array,
  shift: number,
  angles: Float64Array,
  place: number,
  nTime: number,
  k: number,
): void {
  const perWave = -1 / RADIANS_PER_DEGREE / k;
  for (let i = 0; i < nTime; i++) {
    const re = c[2 * i + shift];
    const im = c[2 * i + shift + 1];
    path.size[i] = Math.sqrt(re * re + im * im);
    path.ridge[i] = angles[i + place] * perWave;
  }
}

/**
 * Phase speed of wave k by regression of its ridge longitude on time, weighted by A².
 *
 * Steps whose amplitude is under `floor` times the mean amplitude are dropped; the rest are unwrapped modulo 360°/k. With
 * weights w_i = A_i² and residuals e_i the slope is b = Σw(t − t̄)(λ − λ̄)/S, S = Σw(t − t̄)², and its standard error
 * √(s²/S) with s² = Σwe²/(n − 2): weighted least squares with weights known up to a factor (Draper & Smith 1998, Applied
 * Regression Analysis, §9.2). Residuals count as independent from step to step.
 *
 * @param days   Day of each step.
 * @param from, to Half-open range of steps.
 */
export function phaseDrift(
  path: WavePath,
  days: Float64Array,
  from: number,
  to: number,
  k: number,
  floor: number,
): Drift {
  const { size, ridge } = path;
  let total = 0;
  let present = 0;
  for (let i = from; i < to; i++) {
    if (Number.isNaN(size[i])) continue;
    total += size[i];
    present += 1;
  }
  if (present === 0) return { speed: Number.NaN, error: Number.NaN, reason: MISSING };
  const least = floor * (total / present);
  const cycle = 360 / k;
  let kept = 0;
  let last = 0;
  let turned = 0;
  let ambiguous = false;
  // Sums about the first kept step keep their digits; a second pass is not needed.
  let t0 = 0;
  let l0 = 0;
  let sw = 0;
  let st = 0;
  let sl = 0;
  let stt = 0;
  let stl = 0;
  let sll = 0;
  for (let i = from; i < to; i++) {
    if (!(size[i] > 0) || size[i] < least) continue;
    if (kept === 0) {
      t0 = days[i];
      l0 = ridge[i];
    } else {
      const step = ridge[i] - last;
      const nearest = step - cycle * Math.round(step / cycle);
      turned += nearest - step;
      if (Math.abs(nearest) > AMBIGUOUS_SHARE * (cycle / 2)) ambiguous = true;
    }
    last = ridge[i];
    kept += 1;
    const w = size[i] * size[i];
    const t = days[i] - t0;
    const l = last + turned - l0;
    sw += w;
    st += w * t;
    sl += w * l;
    stt += w * t * t;
    stl += w * t * l;
    sll += w * l * l;
  }
  if (kept === 0) return { speed: Number.NaN, error: Number.NaN, reason: SMALL };
  if (kept < 2) return { speed: Number.NaN, error: Number.NaN, reason: SHORT };
  const spread = stt - (st * st) / sw;
  const together = stl - (st * sl) / sw;
  const speed = together / spread;
  const left = Math.max(0, sll - (sl * sl) / sw - speed * together);
  const error = kept > 2 ? Math.sqrt(left / (kept - 2) / spread) : Number.NaN;
  return { speed, error, reason: ambiguous ? AMBIGUOUS : VALID };
}

/** Why the error of a drift is missing: as the drift itself; two steps have a slope and no scatter about it. */
export function errorReason({ error, reason }: Drift): number {
  return Number.isNaN(error) && (reason === VALID || reason === AMBIGUOUS) ? SHORT : reason;
}

/**
 * Lag-one phase speed −arg[Σ c(t + Δt) conj c(t)]/(k Δt), degrees per day: no unwrapping, but steps must be even.
 *
 * @param c    Coefficients, step i at index 2i + shift.
 * @param step Days from step to step.
 */
export function lagOneDrift(c: Float64Array, shift: number, nTime: number, k: number, step: number): Drift {
  let re = 0;
  let im = 0;
  let pairs = 0;
  for (let i = shift; i + 2 < shift + 2 * nTime; i += 2) {
    const r = c[i + 2] * c[i] + c[i + 3] * c[i + 1];
    const s = c[i + 3] * c[i] - c[i + 2] * c[i + 1];
    if (Number.isNaN(r) || Number.isNaN(s)) continue;
    re += r;
    im += s;
    pairs += 1;
  }
  if (pairs === 0) return { speed: Number.NaN, error: Number.NaN, reason: nTime < 2 ? SHORT : MISSING };
  if (re === 0 && im === 0) return { speed: Number.NaN, error: Number.NaN, reason: SMALL };
  return { speed: -Math.atan2(im, re) / RADIANS_PER_DEGREE / k / step, error: Number.NaN, reason: VALID };
}

/** |time mean of c|/time mean of |c|, 1 stands still, towards 0 only travels; and why there is none. */
export function stationarityRatio(
  c: Float64Array,
  shift: number,
  nTime: number,
): { readonly ratio: number; readonly reason: number } {
  let re = 0;
  let im = 0;
  let size = 0;
  let present = 0;
  for (let i = shift; i < shift + 2 * nTime; i += 2) {
    if (Number.isNaN(c[i])) continue;
    re += c[i];
    im += c[i + 1];
    size += Math.sqrt(c[i] * c[i] + c[i + 1] * c[i + 1]);
    present += 1;
  }
  if (size > 0) return { ratio: Math.sqrt(re * re + im * im) / size, reason: VALID };
  return { ratio: Number.NaN, reason: present === 0 ? MISSING : SMALL };
}
