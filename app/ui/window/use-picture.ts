import { useMemo, useRef } from "react";
import type { Case } from "../case/case.ts";
import type { ChartLayers, ChartView, DialWave, ShareBar } from "../chart/types.ts";
import { type CursorReading, cursorReading } from "../reading/cursor-reading.ts";
import { departures } from "../reading/departures.ts";
import { type Headline, headline } from "../reading/headline.ts";
import type { WaveReading } from "../reading/wave-series.ts";
import type { Numbers } from "../session/use-numbers.ts";
import { fieldTitle } from "../text/field-name.ts";
import { digitsOf, numberText, signedText, unitText } from "../text/number-text.ts";
import { latitudeText, longitudeText } from "../text/place-text.ts";
import { stepHeading } from "../text/step-name.ts";
import { niceStep, shadingStep } from "../theme/nice-step.ts";

const TRAIL_DAYS = 10;

/** Everything that the stage shows, made from the numbers at hand. */
export interface Picture {
  readonly view: ChartView;
  readonly layers: ChartLayers | null;
  readonly cursor: CursorReading | null;
  readonly bars: readonly ShareBar[];
  readonly readings: readonly WaveReading[];
  readonly dials: readonly DialWave[];
  readonly leader: number | null;
  readonly headline: Headline | null;
  /** Step of the shading, set once per record. */
  readonly step: number;
  /** The largest amplitude of the shown span, for the dials' rings. */
  readonly largest: number;
}

export function usePicture(kept: Case, numbers: Numbers): Picture {
  const { field, frame, waves, ribbon } = numbers;
  const at = frame.value;
  const grid = at?.field.grid ?? null;
  const units = at?.field.units ?? "";
  const series = waves.value;
  const isOfField = kept.chart.shading === "field" || at?.frame.background === null;

  // The step belongs to the record and to what is shaded; scrubbing must not change it.
  const stepKey = `${field?.key} ${numbers.level} ${JSON.stringify(kept.background)} ${isOfField} ${kept.chart.hemisphere}`;
  const steps = useRef(new Map<string, number>());
  const shaded = useMemo(() => {
    if (at === null || grid === null) return null;
    return departures(at.frame.values, isOfField ? null : at.frame.background, grid.lon.length);
  }, [at, grid, isOfField]);
  const ribbonShaded = ribbon.value === null ? null : ribbon.value.ribbon;
  const step = useMemo(() => {
    const held = steps.current.get(stepKey);
    if (held !== undefined) return held;
    const nLon = ribbon.value?.field.grid.lon.length ?? 0;
    if (
      ribbonShaded !== null &&
      ribbon.value?.field === field &&
      nLon > 0 &&
      (isOfField || ribbonShaded.background !== null)
    ) {
      const along = departures(ribbonShaded.values, isOfField ? null : ribbonShaded.background, nLon);
      const isGappy = along.filter(Number.isNaN).length > along.length / 2;
      // A band that is mostly missing says little of the map.
      const found = shadingStep(isGappy && shaded !== null ? shaded : along);
      steps.current.set(stepKey, found);
      return found;
    }
    return shaded === null ? 1 : shadingStep(shaded);
  }, [stepKey, ribbonShaded, ribbon.value, field, isOfField, shaded]);

  const interval = useMemo(() => {
    if (at === null) return 1;
    if (at.field.quantity === "geopotential_height")
      return (kept.level ?? 500) >= 700 ? 30 : (kept.level ?? 500) >= 400 ? 60 : 120;
    return niceStep(shadingStep(at.frame.values) / 1.5);
  }, [at, kept.level]);

  const cursor = useMemo(
    () => (at === null || grid === null ? null : cursorReading(at.frame, grid, kept.cursor.lat, kept.cursor.lon)),
    [at, grid, kept.cursor.lat, kept.cursor.lon],
  );
  const now = at?.step ?? kept.cursor.step;
  const { readings, leader, dials, largest } = useMemo(() => {
    if (series === null || field === null || !series.has(now))
      return { readings: [], leader: null, dials: [], largest: 1 };
    const made = series.readings(now, kept.cursor.lon);
    let most = 0;
    for (const k of series.waves)
      for (let i = series.span[0]; i < series.span[1]; i++) most = Math.max(most, series.value("amplitude", i, k) || 0);
    const values = field.steps.values;
    let first = now;
    const isTime = field.steps.kind === "time";
    while (
      first > series.span[0] &&
      (isTime ? (values[now] as number) - (values[first - 1] as number) <= TRAIL_DAYS + 1e-6 : false)
    )
      first -= 1;
    const trailSteps = Array.from({ length: now - first + 1 }, (_, i) => first + i);
    return {
      readings: made,
      leader: series.leader(now),
      largest: most || 1,
      dials: made.map((reading) => ({
        k: reading.k,
        amplitude: reading.amplitude,
        ridge: reading.ridge,
        trail: trailSteps.map((i) => ({
          amplitude: series.value("amplitude", i, reading.k),
          ridge: series.value("ridge_longitude", i, reading.k),
        })),
        background: Number.isFinite(reading.backgroundAmplitude)
          ? { amplitude: reading.backgroundAmplitude, ridge: reading.backgroundRidge }
          : null,
      })),
    };
  }, [series, field, now, kept.cursor.lon]);

  const layers = useMemo((): ChartLayers | null => {
    if (at === null || grid === null || shaded === null || cursor === null) return null;
    const { day, hour } = stepHeading(at.field.steps, at.step);
    const digits = digitsOf(units);
    const name = fieldTitle(at.field);
    const what = isOfField ? "departure from the zonal mean" : "anomaly";
    const level = kept.level === null ? "" : `${kept.level} hPa, `;
    const leading = readings.find(({ k }) => k === leader);
    const row = ribbonRow(ribbon.value, at.step, isOfField);
    return {
      grid,
      contours: { values: at.frame.values, interval, boldEach: 4 },
      shading: { values: shaded, step, units: unitText(units) },
      cursor: { lat: cursor.lat, lon: cursor.lon },
      band: kept.waves.band,
      rim:
        row === null
          ? null
          : {
              values: row,
              wave:
                leading === undefined || !Number.isFinite(leading.amplitude)
                  ? null
                  : { k: leading.k, amplitude: leading.amplitude, ridge: leading.ridge },
            },
      caption: isOfField
        ? [`${name} and`, what, `${level}${day}`, hour]
        : [`${name} and ${what}`, `${level}${day}`, hour],
      readout: [
        `${latitudeText(cursor.lat)} ${longitudeText(cursor.lon, 1)}`,
        `${numberText(cursor.value, digits)} ${unitText(units)}`,
        isOfField
          ? `from zonal mean ${signedText(shaded[indexOf(grid, cursor)] as number, digits)}`
          : `anomaly ${signedText(cursor.anomaly, digits)}`,
      ],
      maskWords: "no value in the file",
    };
  }, [
    at,
    grid,
    shaded,
    cursor,
    units,
    isOfField,
    kept.level,
    kept.waves.band,
    readings,
    leader,
    ribbon.value,
    interval,
    step,
  ]);

  const bars = useMemo((): readonly ShareBar[] => {
    const shares = cursor?.shares;
    if (cursor === null || shares === null || shares === undefined) return [];
    const last = shares.length - 1;
    return Array.from(shares, (value, k) => ({
      k: k === last ? 9 : k,
      label: k === 0 ? "mean" : k === last ? `k ${last}+` : `k ${k}`,
      value,
    })).filter(({ k }) => cursor.of === "background" || k > 0);
  }, [cursor]);

  const said = useMemo(
    () =>
      series === null || field === null
        ? null
        : headline(series, field.steps, now, kept.waves.band, units, kept.cursor.lon),
    [series, field, now, kept.waves.band, units, kept.cursor.lon],
  );
  const { kind, hemisphere, turn, cut } = kept.chart;
  const view = useMemo(() => ({ kind, hemisphere, turn, cut }), [kind, hemisphere, turn, cut]);
  return { view, layers, cursor, bars, readings, dials, leader, headline: said, step, largest };
}

function indexOf(grid: { lat: Float64Array; lon: Float64Array }, cursor: CursorReading): number {
  return grid.lat.indexOf(cursor.lat) * grid.lon.length + grid.lon.indexOf(cursor.lon);
}

/** The band's departure at a step, from the ribbon's numbers. */
function ribbonRow(ribbon: Numbers["ribbon"]["value"], step: number, isOfField: boolean): Float32Array | null {
  if (ribbon === null) return null;
  const { span, ribbon: numbers, field } = ribbon;
  if (step < span[0] || step >= span[1]) return null;
  const nLon = field.grid.lon.length;
  const from = (step - span[0]) * nLon;
  const background = isOfField ? null : numbers.background;
  return departures(
    numbers.values.subarray(from, from + nLon),
    background === null ? null : background.subarray(from, from + nLon),
    nLon,
  );
}
