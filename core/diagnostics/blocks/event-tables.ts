import { reasonCode } from "../../field/reasons.ts";
import type { Coordinate, ResultVariable, Series } from "../entry.ts";
import type { BlockEvent } from "./block-events.ts";
import type { BlockRecord } from "./block-record.ts";
import { blockingIntensity, strengthClass } from "./block-strength.ts";
import type { BlockField } from "./block-summary.ts";
import { greatCircle } from "./great-circle.ts";
import type { RecordPieces } from "./record-pieces.ts";

const MISSING = reasonCode("missing");
const TIME_UNITS = "days since 1970-01-01 00:00:00";

function table(
  dim: string,
  size: number,
  name: string,
  title: string,
  units: string,
  numberOf: (row: number) => number,
): ResultVariable {
  const data = new Float64Array(size);
  let isWhole = true;
  for (let row = 0; row < size; row++) {
    data[row] = numberOf(row);
    if (Number.isNaN(data[row])) isWhole = false;
  }
  const plain = { name, title, units, dims: [dim], shape: [size], data };
  return isWhole ? plain : { ...plain, reasons: Uint8Array.from(data, (value) => (Number.isNaN(value) ? MISSING : 0)) };
}

/** The highest of some numbers and where it stands; −1 if all are NaN. */
function indexOfHighest(values: readonly number[]): number {
  let best = -1;
  values.forEach((value, i) => {
    if (!Number.isNaN(value) && (best < 0 || value > values[best])) best = i;
  });
  return best;
}

function mean(values: readonly number[]): number {
  const present = values.filter((value) => !Number.isNaN(value));
  return present.length === 0 ? Number.NaN : present.reduce((sum, value) => sum + value, 0) / present.length;
}

/** The events as tables: one row an event on `event`, and one row for each of its steps on `event_step`. Empty without events. */
export function eventTables(
  events: readonly BlockEvent[],
  record: BlockRecord,
  pieces: RecordPieces,
  series: Series,
): { readonly variables: ResultVariable[]; readonly coordinates: Coordinate[] } {
  if (events.length === 0) return { variables: [], coordinates: [] };
  const { choice } = record;
  const hasArea = choice.index !== "one-dimensional";
  // A persistent low is no block of high heights: no contour to stand out from.
  const hasStrength = choice.index !== "anomaly" || choice.sign === 1;
  const days = pieces.days ?? new Float64Array(record.nTime);
  const numbers = (event: BlockEvent, field: BlockField): number[] =>
    event.blocks.map((block) => record.number(block, field));
  const strengths = events.map((event) =>
    event.blocks.map((block) =>
      blockingIntensity(
        record.number(block, "highest"),
        record.number(block, "upstream"),
        record.number(block, "downstream"),
      ),
    ),
  );
  const peaks = events.map((event) => {
    const best = indexOfHighest(numbers(event, "highest"));
    return event.blocks[best];
  });
  const { units } = series;
  const row = (name: string, title: string, unit: string, numberOf: (event: BlockEvent, i: number) => number) =>
    table("event", events.length, name, title, unit, (i) => numberOf(events[i], i));
  const variables: ResultVariable[] = [
    row("start", "Onset, the first blocked step", TIME_UNITS, ({ steps }) => days[steps[0]]),
    row("end", "End, the last blocked step", TIME_UNITS, ({ steps }) => days[steps[steps.length - 1]]),
    row("days", "Duration, onset and end counted", "days", (event) => event.days),
    row("onset_cut", "Why the onset may be earlier", "1", (event) => event.onsetCut),
    row("end_cut", "Why the end may be later", "1", (event) => event.endCut),
    row("event_hemisphere", "1 northern, -1 southern", "1", ({ lane }) => choice.lanes[lane].side),
    row("onset_longitude", "Centroid at the onset", "degrees_east", ({ blocks }) =>
      record.number(blocks[0], "longitude"),
    ),
    row("onset_latitude", "Centroid at the onset", "degrees_north", ({ blocks }) =>
      record.number(blocks[0], "latitude"),
    ),
    row("track_length", "Way of the centroid", "km", (event) => trackLength(event, record)),
    row("largest_width", "Largest width", "degrees_east", (event) => Math.max(...numbers(event, "width"))),
  ];
  if (hasArea)
    variables.push(row("largest_area", "Largest area", "km2", (event) => Math.max(...numbers(event, "area"))));
  if (hasStrength)
    variables.push(
      row("strength", "Blocking intensity, mean over the steps", "1", (_, i) => mean(strengths[i])),
      row("strength_class", "1 weak, 2 moderate, 3 strong", "1", (_, i) => strengthClass(mean(strengths[i]))),
      row("largest_strength", "Largest blocking intensity of a step", "1", (_, i) => {
        const best = indexOfHighest(strengths[i]);
        return best < 0 ? Number.NaN : strengths[i][best];
      }),
    );
  variables.push(
    row("highest", "Highest height in the block", units, (_, i) => record.number(peaks[i], "highest")),
    row("highest_longitude", "Where the highest height is", "degrees_east", (_, i) =>
      record.number(peaks[i], "highest_longitude"),
    ),
    row("highest_latitude", "Where the highest height is", "degrees_north", (_, i) =>
      record.number(peaks[i], "highest_latitude"),
    ),
  );

  const rows = events.flatMap((event, i) => event.blocks.map((block, k) => ({ i, k, block, step: event.steps[k] })));
  const step = (name: string, title: string, unit: string, numberOf: (one: (typeof rows)[number]) => number) =>
    table("event_step", rows.length, name, title, unit, (r) => numberOf(rows[r]));
  const each = (name: string, title: string, unit: string, field: BlockField) =>
    step(name, title, unit, ({ block }) => record.number(block, field));
  variables.push(
    step("step_event", "Event that the step belongs to", "1", ({ i }) => i + 1),
    step("step_time", "Time of the step", TIME_UNITS, (one) => days[one.step]),
    each("step_longitude", "Centroid", "degrees_east", "longitude"),
    each("step_latitude", "Centroid", "degrees_north", "latitude"),
    each("step_width", "Width", "degrees_east", "width"),
  );
  if (hasArea) variables.push(each("step_area", "Area", "km2", "area"));
  variables.push(each("step_highest", "Highest height in the block", units, "highest"));
  if (hasStrength) variables.push(step("step_strength", "Blocking intensity", "1", ({ i, k }) => strengths[i][k]));
  const numbered = (name: string, size: number, words: string): Coordinate => ({
    name,
    values: Float64Array.from({ length: size }, (_, i) => i + 1),
    units: "1",
    attributes: { long_name: words },
  });
  return {
    variables,
    coordinates: [
      numbered("event", events.length, "blocking event"),
      numbered("event_step", rows.length, "steps of the events, one event after the other"),
    ],
  };
}

/** Sum of the ways from step to step, km; steps without a centroid are passed over. */
function trackLength({ blocks }: BlockEvent, record: BlockRecord): number {
  let way = 0;
  let before = -1;
  for (const block of blocks) {
    if (Number.isNaN(record.number(block, "longitude"))) continue;
    if (before >= 0)
      way += greatCircle(
        record.number(before, "longitude"),
        record.number(before, "latitude"),
        record.number(block, "longitude"),
        record.number(block, "latitude"),
      );
    before = block;
  }
  return way;
}
