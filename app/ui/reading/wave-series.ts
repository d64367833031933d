import type { ResultVariable } from "../../../core/diagnostics/entry.ts";
import type { IndexRange } from "../../../core/field/axes.ts";
import { REASONS, type ReasonKey } from "../../../core/field/reasons.ts";
import type { Result } from "../../../core/recipe/recipe.ts";
import { westEast } from "../text/place-text.ts";

/** One wave at one step, as computed; NaN where there is no number. */
export interface WaveReading {
  readonly k: number;
  readonly amplitude: number;
  /** The ridge that the result states, in [0, 360/k). */
  readonly ridge: number;
  /** The wave's ridge nearest to the cursor, in [−180, 180). */
  readonly nearestRidge: number;
  /** Of the variance along the circle, 0 to 1. */
  readonly share: number;
  /** Degrees east a day over the trailing days, and its standard error. */
  readonly drift: number;
  readonly driftError: number;
  readonly driftReason: ReasonKey;
  /** The background's wave; NaN where there is no background. */
  readonly backgroundAmplitude: number;
  readonly backgroundRidge: number;
}

const VALID: ReasonKey = "valid";

/** The wave's ridge that lies nearest to a longitude. */
export function ridgeNearest(ridge: number, k: number, lon: number): number {
  if (!Number.isFinite(ridge)) return Number.NaN;
  const cycle = 360 / k;
  return westEast(ridge + cycle * Math.round((lon - ridge) / cycle));
}

/** Waves of one band over a span of steps: a view on the result of the window's recipe. */
export class WaveSeries {
  readonly result: Result;
  readonly span: IndexRange;
  readonly waves: readonly number[];
  readonly #variables: ReadonlyMap<string, ResultVariable>;

  /** @param span Steps of the field that the result covers. */
  constructor(result: Result, span: IndexRange) {
    this.result = result;
    this.span = span;
    this.waves = Array.from(result.coordinates.find(({ name }) => name === "wavenumber")?.values ?? []);
    this.#variables = new Map(result.variables.map((variable) => [variable.name, variable]));
  }

  has(step: number): boolean {
    return step >= this.span[0] && step < this.span[1];
  }

  /** One number; NaN outside the span or where the result has no such variable. */
  value(name: string, step: number, k: number): number {
    const variable = this.#variables.get(name);
    const wave = this.waves.indexOf(k);
    if (variable === undefined || wave < 0 || !this.has(step)) return Number.NaN;
    return variable.data[(step - this.span[0]) * this.waves.length + wave];
  }

  reason(name: string, step: number, k: number): ReasonKey {
    const wave = this.waves.indexOf(k);
    const code = this.#variables.get(name)?.reasons?.[(step - this.span[0]) * this.waves.length + wave] ?? 0;
    return REASONS.find((reason) => reason.code === code)?.key ?? VALID;
  }

  /** @param lon Longitude to which the nearest ridge is chosen. */
  reading(step: number, k: number, lon: number): WaveReading {
    const ridge = this.value("ridge_longitude", step, k);
    return {
      k,
      amplitude: this.value("amplitude", step, k),
      ridge,
      nearestRidge: ridgeNearest(ridge, k, lon),
      share: this.value("variance_share", step, k),
      drift: this.value("drift", step, k),
      driftError: this.value("drift_error", step, k),
      driftReason: this.reason("drift", step, k),
      backgroundAmplitude: this.value("background_amplitude", step, k),
      backgroundRidge: this.value("background_ridge_longitude", step, k),
    };
  }

  readings(step: number, lon: number): WaveReading[] {
    return this.waves.map((k) => this.reading(step, k, lon));
  }

  /** The wave of the largest amplitude; null where none has a number. */
  leader(step: number): number | null {
    let best: number | null = null;
    let most = 0;
    for (const k of this.waves) {
      const amplitude = this.value("amplitude", step, k);
      if (amplitude > most) {
        most = amplitude;
        best = k;
      }
    }
    return best;
  }
}
