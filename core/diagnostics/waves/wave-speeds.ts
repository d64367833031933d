import { EARTH_RADIUS, RADIANS_PER_DEGREE, SECONDS_PER_DAY } from "../../constants.ts";
import { reasonCode } from "../../field/reasons.ts";
import type { ResultVariable } from "../entry.ts";
import { isNyquist } from "./coefficients.ts";
import {
  type Drift,
  errorReason,
  fillWavePath,
  lagOneDrift,
  phaseDrift,
  stationarityRatio,
  type WavePath,
} from "./drift.ts";
import type { WaveFrame } from "./wave-frame.ts";

const WHOLE = ["level", "row", "wavenumber"] as const;
const EACH = ["time", "level", "row", "wavenumber"] as const;
const NO_TIME = reasonCode("no_time");
const AMBIGUOUS = reasonCode("ambiguous");
const SMALL = reasonCode("small");
const NOTHING: Drift = { speed: Number.NaN, error: Number.NaN, reason: NO_TIME };
/** Days; times in hours stored as float64 days round off far below it. */
const STEP_TOLERANCE = 1e-6;
/** A wave with less of the variance than this, over the days of a drift, has no drift worth telling. */
export const LEAST_SHARE = 0.005;

/** Days from step to step, or null where they are uneven. */
function evenStepOf(days: Float64Array): number | null {
  if (days.length < 2) return null;
  const step = ((days[days.length - 1] as number) - (days[0] as number)) / (days.length - 1);
  for (let i = 1; i < days.length; i++)
    if (Math.abs((days[i] as number) - (days[i - 1] as number) - step) > STEP_TOLERANCE) return null;
  return step;
}

/** What speeds are made from, chunk by chunk in the order of time. */
export interface WaveRecord {
  /** Coefficients, each of shape (places, waves, steps of the chunk, 2). */
  readonly paths: readonly Float64Array[];
  /** Their arguments, radians, each of shape (places, waves, steps of the chunk). */
  readonly angles: readonly Float64Array[];
}

/** All steps of each wave of one place, side by side. @param each Numbers of a step and wave. */
function gathered(
  record: readonly Float64Array[],
  place: number,
  places: number,
  waves: number,
  nTime: number,
  each: number,
  into: Float64Array,
): void {
  let at = 0;
  for (const chunk of record) {
    const length = chunk.length / (places * waves);
    for (let w = 0; w < waves; w++) {
      const from = (place * waves + w) * length;
      into.set(chunk.subarray(from, from + length), w * nTime * each + at);
    }
    at += length;
  }
}

function emptyPath(nTime: number): WavePath {
  return { size: new Float64Array(nTime), ridge: new Float64Array(nTime) };
}

/** Speeds over all steps, and how far each wave stands still. `notes` takes a sentence where something is left out. */
export function speedVariables(frame: WaveFrame, record: WaveRecord, notes: string[]): ResultVariable[] {
  const { waves, nLevel, nRow, nTime, choice, series, nLon } = frame;
  const isTime = series.steps.kind === "time";
  const size = nLevel * nRow * waves.length;
  const [speed, error, speedMs, lag, ratio] = Array.from({ length: 5 }, () => new Float64Array(size)) as [
    Float64Array,
    Float64Array,
    Float64Array,
    Float64Array,
    Float64Array,
  ];
  const speedReasons = new Uint8Array(size);
  const errorReasons = new Uint8Array(size);
  const lagReasons = new Uint8Array(size);
  const ratioReasons = new Uint8Array(size);
  const days = frame.days;
  const step = evenStepOf(days);
  if (!isTime)
    notes.push(`The record steps along "${series.steps.name}", which is no time: there are no phase speeds.`);
  else if (step === null && nTime > 1) notes.push("The steps are not evenly spaced: there is no lag-one speed.");
  const place = new Float64Array(2 * waves.length * nTime);
  const angles = new Float64Array(waves.length * nTime);
  const path = emptyPath(nTime);
  for (let p = 0, at = 0; p < nLevel * nRow; p++) {
    gathered(record.paths, p, nLevel * nRow, waves.length, nTime, 2, place);
    gathered(record.angles, p, nLevel * nRow, waves.length, nTime, 1, angles);
    const metres =
      EARTH_RADIUS * Math.cos((choice.latitudes[p % nRow] as number) * RADIANS_PER_DEGREE) * RADIANS_PER_DEGREE;
    for (let w = 0; w < waves.length; w++) {
      const k = waves[w];
      const shift = 2 * w * nTime;
      // The Nyquist wave has no phase: its crests can only stand on the columns or between them.
      const usable = isTime && !isNyquist(k, nLon);
      if (usable) fillWavePath(path, place, shift, angles, w * nTime, nTime, k);
      const drift = usable ? phaseDrift(path, days, 0, nTime, k, choice.floor) : NOTHING;
      const lagOne = usable && step !== null ? lagOneDrift(place, shift, nTime, k, step) : NOTHING;
      const still = stationarityRatio(place, shift, nTime);
      speed[at] = drift.speed;
      error[at] = drift.error;
      speedMs[at] = (drift.speed * metres) / SECONDS_PER_DAY;
      lag[at] = lagOne.speed;
      ratio[at] = still.ratio;
      speedReasons[at] = drift.reason;
      errorReasons[at] = errorReason(drift);
      lagReasons[at] = lagOne.reason;
      ratioReasons[at] = still.reason;
      at += 1;
    }
  }
  return [
    frame.variable("phase_speed", "Phase speed, eastward", "degrees_east day-1", WHOLE, speed, speedReasons),
    frame.variable(
      "phase_speed_error",
      "Standard error of the phase speed",
      "degrees_east day-1",
      WHOLE,
      error,
      errorReasons,
    ),
    frame.variable(
      "phase_speed_ms",
      "Phase speed at the row's latitude, eastward",
      "m s-1",
      WHOLE,
      speedMs,
      speedReasons,
    ),
    frame.variable(
      "lag_one_speed",
      "Phase speed from one step to the next",
      "degrees_east day-1",
      WHOLE,
      lag,
      lagReasons,
    ),
    frame.variable("stationarity_ratio", "Stationarity ratio", "1", WHOLE, ratio, ratioReasons),
  ];
}

/** Drift at each step from the days up to it, as one sees it on the day. */
export function driftVariables(frame: WaveFrame, record: WaveRecord, variance: Float64Array): ResultVariable[] {
  const { waves, nLevel, nRow, nTime, choice, series, nLon, days } = frame;
  const isTime = series.steps.kind === "time";
  const places = nLevel * nRow;
  const size = nTime * places * waves.length;
  const speed = frame.array(size);
  const error = frame.array(size);
  const reasons = new Uint8Array(size);
  const errorReasons = new Uint8Array(size);
  const firsts = new Int32Array(nTime);
  for (let t = 0, from = 0; t < nTime; t++) {
    while (days[t] - days[from] > choice.driftDays + STEP_TOLERANCE) from += 1;
    firsts[t] = from;
  }
  const place = new Float64Array(2 * waves.length * nTime);
  const angles = new Float64Array(waves.length * nTime);
  const path = emptyPath(nTime);
  const totals = new Float64Array(nTime);
  for (let p = 0; p < places; p++) {
    gathered(record.paths, p, places, waves.length, nTime, 2, place);
    gathered(record.angles, p, places, waves.length, nTime, 1, angles);
    for (let t = 0; t < nTime; t++) {
      totals[t] = 0;
      for (let s = firsts[t]; s <= t; s++) totals[t] += variance[s * places + p];
    }
    waves.forEach((k, w) => {
      const usable = isTime && !isNyquist(k, nLon);
      if (usable) fillWavePath(path, place, 2 * w * nTime, angles, w * nTime, nTime, k);
      for (let t = 0; t < nTime; t++) {
        let drift = usable ? phaseDrift(path, days, firsts[t], t + 1, k, choice.floor) : NOTHING;
        let own = 0;
        for (let s = firsts[t]; s <= t; s++) own += 2 * path.size[s] * path.size[s];
        const valued = drift.reason === 0 || drift.reason === AMBIGUOUS;
        if (valued && own < LEAST_SHARE * totals[t]) drift = { speed: Number.NaN, error: Number.NaN, reason: SMALL };
        const at = (t * places + p) * waves.length + w;
        speed[at] = drift.speed;
        error[at] = drift.error;
        reasons[at] = drift.reason;
        errorReasons[at] = errorReason(drift);
      }
    });
  }
  return [
    frame.variable(
      "drift",
      `Drift over the last ${choice.driftDays} days, eastward`,
      "degrees_east day-1",
      EACH,
      speed,
      reasons,
    ),
    frame.variable("drift_error", "Standard error of the drift", "degrees_east day-1", EACH, error, errorReasons),
  ];
}
