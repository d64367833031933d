import type { StepAxis } from "../../../core/field/axes.ts";
import { stepBefore } from "../case/step-span.ts";
import { digitsOf, numberText, unitText } from "../text/number-text.ts";
import { bandText, longitudeText } from "../text/place-text.ts";
import type { WaveReading, WaveSeries } from "./wave-series.ts";

export interface Headline {
  /** One sentence: which wave leads, how large, where, and where it goes. */
  readonly main: string;
  /** What it carries, how it changed, and who follows. */
  readonly second: string;
}

/** Followers under this share of the leader's amplitude are not worth a word. */
const LEAST_FOLLOWER = 0.1;

function driftWords({ drift, driftError, driftReason }: WaveReading): string {
  if (driftReason === "ambiguous") return ", its drift unclear";
  if (!Number.isFinite(drift)) return "";
  if (Math.abs(drift) < 0.5 || Math.abs(drift) < driftError) return ", standing still";
  return `, drifting ${drift > 0 ? "east" : "west"} ${numberText(Math.abs(drift))}° a day`;
}

function changeWords(series: WaveSeries, steps: StepAxis, step: number, k: number, units: string): string {
  const before = stepBefore(steps, step);
  if (before === null) return "";
  const change = series.value("amplitude", step, k) - series.value("amplitude", before.step, k);
  if (!Number.isFinite(change)) return "";
  const since = before.isDay ? "since yesterday" : `since the ${steps.kind === "time" ? "step" : steps.name} before`;
  const text = numberText(Math.abs(change), digitsOf(units));
  if (Number(text.replace(/\s/g, "")) === 0) return ` and has not changed ${since}`;
  return ` and has ${change > 0 ? "grown" : "weakened"} by ${text} ${unitText(units)} ${since}`;
}

function followerWords(readings: readonly WaveReading[], leader: WaveReading, units: string): string {
  const digits = digitsOf(units);
  const followers = readings
    .filter(({ k, amplitude }) => k !== leader.k && amplitude >= LEAST_FOLLOWER * leader.amplitude)
    .sort((a, b) => b.amplitude - a.amplitude)
    .slice(0, 2);
  if (followers.length === 0) return "no other wave comes near";
  const names = followers.map(({ k }) => `k ${k}`).join(" and ");
  const sizes = followers.map(({ amplitude }) => numberText(amplitude, digits)).join(" and ");
  return `${names} ${followers.length > 1 ? "follow" : "follows"} with ${sizes} ${unitText(units)}`;
}

/**
 * The answer to "which waves shape the flow", in words made from the numbers at a step.
 *
 * @param lon The cursor's longitude: of the leading wave's ridges the nearest is named.
 * @returns null where no wave has a number at that step.
 */
export function headline(
  series: WaveSeries,
  steps: StepAxis,
  step: number,
  band: readonly [number, number],
  units: string,
  lon: number,
): Headline | null {
  const readings = series.readings(step, lon);
  const leader = readings.find(({ k }) => k === series.leader(step));
  if (leader === undefined) return null;
  const size = `${numberText(leader.amplitude, digitsOf(units))} ${unitText(units)}`;
  const along = bandText(band);
  const main = `k ${leader.k} leads at ${along}: ${size}, ridge ${longitudeText(leader.nearestRidge)}${driftWords(leader)}`;
  const carries = `It carries ${numberText(100 * leader.share)} % of the variance`;
  const second = `${carries}${changeWords(series, steps, step, leader.k, units)}; ${followerWords(readings, leader, units)}.`;
  return { main, second };
}
