import type { OutputSpec } from "../entry.ts";

const CELLS = [
  "hemisphere, where both are asked for in one dimension",
  "latitude, unless in one dimension",
  "longitude",
];
const EVENT = ["event"];
const STEP = ["event_step"];
const NEEDS_AREA = "index is two-dimensional or anomaly";
const NEEDS_HIGHS = "index is not anomaly, or sign is positive";
const NEEDS_TIME = "the steps are times";

function output(
  name: string,
  title: string,
  units: string,
  dims: readonly string[],
  about: string,
  when?: string,
): OutputSpec {
  return { name, title, units, dims, about, ...(when === undefined ? {} : { when }) };
}

/** What blocking writes. */
export const BLOCK_OUTPUTS: readonly OutputSpec[] = [
  output(
    "blocked",
    "Blocked",
    "1",
    ["time", ...CELLS],
    "1 blocked, 0 not, −1 unknown; the width and the duration of events do not count here.",
  ),
  output("frequency", "Frequency", "1", CELLS, "Share of the steps that are blocked, of those where it is known."),
  output("frequency_month", "Frequency by month", "1", ["month", ...CELLS], "The same by calendar month.", NEEDS_TIME),
  output("frequency_season", "Frequency by season", "1", ["season", ...CELLS], "The same by season.", NEEDS_TIME),
  output("start", "Onset", "days since 1970-01-01 00:00:00", EVENT, "The first step of the event."),
  output("end", "End", "days since 1970-01-01 00:00:00", EVENT, "The last step of the event."),
  output("days", "Duration", "days", EVENT, "Onset and end counted."),
  output(
    "onset_cut",
    "Onset cut",
    "1",
    EVENT,
    "Why it may have begun earlier: 0 it has not, 1 the record begins, 2 a gap in the record, 3 missing values.",
  ),
  output(
    "end_cut",
    "End cut",
    "1",
    EVENT,
    "Why it may have ended later: 0 it has not, 1 the record ends, 2 a gap in the record, 3 missing values.",
  ),
  output("event_hemisphere", "Hemisphere", "1", EVENT, "1 northern, −1 southern."),
  output(
    "onset_longitude",
    "Longitude of the onset",
    "degrees_east",
    EVENT,
    "Centroid: circular mean over the cells, by area.",
  ),
  output("onset_latitude", "Latitude of the onset", "degrees_north", EVENT, "Centroid: mean over the cells, by area."),
  output("track_length", "Way", "km", EVENT, "Way of the centroid, along great circles from step to step."),
  output("largest_width", "Largest width", "degrees_east", EVENT, "Columns of the block times their spacing."),
  output("largest_area", "Largest area", "km2", EVENT, "Of the blocked cells of one step.", NEEDS_AREA),
  output("strength", "Strength", "1", EVENT, "Blocking intensity, the mean over the event's steps.", NEEDS_HIGHS),
  output("strength_class", "Class", "1", EVENT, "1 weak (under 2.0), 2 moderate, 3 strong (over 4.3).", NEEDS_HIGHS),
  output("largest_strength", "Largest strength", "1", EVENT, "The largest blocking intensity of a step.", NEEDS_HIGHS),
  output("highest", "Highest height", "input", EVENT, "In the block, over the event."),
  output("highest_longitude", "Longitude of the highest height", "degrees_east", EVENT, "The cell where it is."),
  output("highest_latitude", "Latitude of the highest height", "degrees_north", EVENT, "The cell where it is."),
  output("step_event", "Event", "1", STEP, "Number of the event that a step of the tracks belongs to."),
  output("step_time", "Time", "days since 1970-01-01 00:00:00", STEP, "Of the step."),
  output("step_longitude", "Longitude", "degrees_east", STEP, "Centroid at the step."),
  output("step_latitude", "Latitude", "degrees_north", STEP, "Centroid at the step."),
  output("step_width", "Width", "degrees_east", STEP, "At the step."),
  output("step_area", "Area", "km2", STEP, "At the step.", NEEDS_AREA),
  output("step_highest", "Highest height", "input", STEP, "In the block at the step."),
  output("step_strength", "Strength", "1", STEP, "Blocking intensity at the step.", NEEDS_HIGHS),
];
