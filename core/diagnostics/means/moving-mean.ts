import { runningMean, runningMeanHalo } from "../../background/running-mean.ts";
import type { BackgroundSpec } from "../../background/spec.ts";
import { reasonCode } from "../../field/reasons.ts";
import type { ChunkInput, ChunkPart, Coordinate, Outcome, Series } from "../entry.ts";
import { isSingle, resultArray, SINGLE_NOTE } from "../precision.ts";
import { mapCoordinates, mapVariable } from "./mean-map.ts";

const MISSING = reasonCode("missing");
const EDGE = reasonCode("edge");

/** Numbers of the whole result: it is as long as the record. */
function sizeOf({ times, levels, grid }: Series): number {
  return (times[1] - times[0]) * (levels?.length ?? 1) * grid.lat.length * grid.lon.length;
}

/** Running mean of a chunk's own steps. */
export function movingPart({ slabs, loaded, times }: ChunkInput, series: Series, spec: BackgroundSpec): ChunkPart {
  const mean = runningMean(slabs.field, series.steps, loaded, times, spec);
  return { mean: isSingle(sizeOf(series)) ? new Float32Array(mean) : mean };
}

/** The chunks' running means end to end, and why some steps have none. */
export function movingMean(parts: readonly ChunkPart[], series: Series, spec: BackgroundSpec): Outcome {
  const { steps, times } = series;
  const data = resultArray(sizeOf(series));
  let at = 0;
  for (const part of parts) {
    data.set(part.mean, at);
    at += part.mean.length;
  }
  const n = times[1] - times[0];
  const half = runningMeanHalo(spec, steps);
  const cells = data.length / n;
  const reasons = new Uint8Array(data.length);
  let lost = 0;
  for (let t = 0; t < n; t++) {
    const step = times[0] + t;
    const isEdge = step < half || step + half >= steps.values.length;
    if (isEdge) lost += 1;
    for (let c = t * cells; c < (t + 1) * cells; c++) if (Number.isNaN(data[c])) reasons[c] = isEdge ? EDGE : MISSING;
  }
  const time: Coordinate = {
    name: "time",
    values: steps.values.slice(times[0], times[1]),
    units: "days since 1970-01-01 00:00:00",
    attributes: { standard_name: "time", calendar: steps.calendar },
  };
  const notes = [`Each mean is over ${2 * half + 1} steps.`];
  if (lost > 0) notes.push(`${lost} steps lie within ${half} steps of the record's ends and have no centred mean.`);
  if (data instanceof Float32Array) notes.push(SINGLE_NOTE);
  const title = { name: "mean", title: "Running mean", units: series.units, lead: ["time", n] as const };
  return {
    coordinates: [time, ...mapCoordinates(series)],
    variables: [mapVariable(series, title, data, reasons)],
    notes,
  };
}
