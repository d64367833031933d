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

/**
 * Phase speed of wave k by regression of its ridge longitude on time, weighted by A².
 *
 * Steps whose amplitude is under `floor` times the mean amplitude are dropped; the rest are unwrapped modulo 360°/k. With
 * weights w_i = A_i² and residuals e_i the slope is b = Σw(t − t̄)(λ − λ̄)/S, S = Σw(t − t̄)², and its standard error
 * √(s²/S) with s² = Σwe²/(n − 2): weighted least squares with weights known up to a factor (Draper & Smith 1998, Applied
 * Regression Analysis, §9.2).
 *
 * @param re, im Coefficients, step i at index i · stride + shift.
 * @param days   Day of each step.
 * @param from, to Half-open range of steps.
 */
export function phaseDrift(
  c: Float64Array,
  stride: number,
  shift: number,
  days: ArrayLike<number>,
  from: number,
  to: number,
  k: number,
  floor: number,
): Drift {
  let total = 0;
  let present = 0;
  for (let i = from; i < to; i++) {
    const re = c[i * stride + shift] as number;
    const im = c[i * stride + shift + 1] as number;
    const a = Math.sqrt(re * re + im * im);
    if (!Number.isNaN(a)) {
      total += a;
      present += 1;
    }
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
    const re = c[i * stride + shift] as number;
    const im = c[i * stride + shift + 1] as number;
    const w = re * re + im * im;
    if (!(w > 0) || Math.sqrt(w) < least) continue;
    const ridge = -Math.atan2(im, re) / RADIANS_PER_DEGREE / k;
    if (kept === 0) {
      t0 = days[i] as number;
      l0 = ridge;
    } else {
      const step = ridge - last;
      const nearest = step - cycle * Math.round(step / cycle);
      turned += nearest - step;
      if (Math.abs(nearest) > AMBIGUOUS_SHARE * (cycle / 2)) ambiguous = true;
    }
    last = ridge;
    kept += 1;
    const t = (days[i] as number) - t0;
    const l = ridge + turned - l0;
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

/**
 * Lag-one phase speed −arg[Σ c(t + Δt) conj c(t)]/(k Δt), degrees per day: no unwrapping, but steps must be even.
 *
 * @param step Days from step to step.
 */
export function lagOneDrift(
  c: Float64Array,
  stride: number,
  shift: number,
  from: number,
  to: number,
  k: number,
  step: number,
): Drift {
  let re = 0;
  let im = 0;
  let pairs = 0;
  for (let i = from; i + 1 < to; i++) {
    const a = c[i * stride + shift] as number;
    const b = c[i * stride + shift + 1] as number;
    const p = c[(i + 1) * stride + shift] as number;
    const q = c[(i + 1) * stride + shift + 1] as number;
    const r = p * a + q * b;
    const s = q * a - p * b;
    if (Number.isNaN(r) || Number.isNaN(s)) continue;
    re += r;
    im += s;
    pairs += 1;
  }
  if (pairs === 0) return { speed: Number.NaN, error: Number.NaN, reason: to - from < 2 ? SHORT : MISSING };
  if (re === 0 && im === 0) return { speed: Number.NaN, error: Number.NaN, reason: SMALL };
  return { speed: -Math.atan2(im, re) / RADIANS_PER_DEGREE / k / step, error: Number.NaN, reason: VALID };
}

/** |time mean of c|/time mean of |c|: 1 stands still, towards 0 only travels. NaN without a value. */
export function stationarityRatio(c: Float64Array, stride: number, shift: number, from: number, to: number): number {
  let re = 0;
  let im = 0;
  let size = 0;
  for (let i = from; i < to; i++) {
    const a = c[i * stride + shift] as number;
    const b = c[i * stride + shift + 1] as number;
    if (Number.isNaN(a)) continue;
    re += a;
    im += b;
    size += Math.sqrt(a * a + b * b);
  }
  return size > 0 ? Math.sqrt(re * re + im * im) / size : Number.NaN;
}
