import { type BlockChoice, blockChoice } from "./blocks/block-choice.ts";
import { blockChunk } from "./blocks/block-chunk.ts";
import { type BlockEvent, blockEvents, CUTS } from "./blocks/block-events.ts";
import { BlockFrame } from "./blocks/block-frame.ts";
import { blockedVariable, frequencies } from "./blocks/block-frequencies.ts";
import { BlockRecord } from "./blocks/block-record.ts";
import { ROW_TOLERANCE } from "./blocks/block-rows.ts";
import { eventTables } from "./blocks/event-tables.ts";
import { BLOCK_OPTIONS } from "./blocks/option-specs.ts";
import { BLOCK_OUTPUTS } from "./blocks/output-specs.ts";
import { DAY_TOLERANCE, type RecordPieces, recordPieces, stepsWithin } from "./blocks/record-pieces.ts";
import type { ChunkPart, Diagnostic, OptionValues, Outcome, Series } from "./entry.ts";

const FORMULA =
  "<mrow><mfrac><mrow><mi>Z</mi><mo>(</mo><msub><mi>φ</mi><mn>0</mn></msub><mo>)</mo><mo>−</mo><mi>Z</mi><mo>(</mo><msub><mi>φ</mi><mi>s</mi></msub><mo>)</mo></mrow>" +
  "<mrow><msub><mi>φ</mi><mn>0</mn></msub><mo>−</mo><msub><mi>φ</mi><mi>s</mi></msub></mrow></mfrac><mo>&gt;</mo><mn>0</mn><mo>,</mo><mspace width='1em'/>" +
  "<mfrac><mrow><mi>Z</mi><mo>(</mo><msub><mi>φ</mi><mi>n</mi></msub><mo>)</mo><mo>−</mo><mi>Z</mi><mo>(</mo><msub><mi>φ</mi><mn>0</mn></msub><mo>)</mo></mrow>" +
  "<mrow><msub><mi>φ</mi><mi>n</mi></msub><mo>−</mo><msub><mi>φ</mi><mn>0</mn></msub></mrow></mfrac><mo>&lt;</mo><mo>−</mo><mn>10</mn><mspace width='0.3em'/><mtext>m/°</mtext></mrow>";

/** A background of one number per cell leaves the annual cycle in the departures of a record longer than this, days. */
const SEASONAL_DAYS = 200;

/** What the grid's rows made of the asked angles. */
function rowNotes(choice: BlockChoice): string[] {
  const off = Math.max(...choice.lanes.map(({ reversals }) => reversals?.off ?? 0));
  const notes: string[] = [];
  if (off > ROW_TOLERANCE)
    notes.push(
      `Angles go to the nearest rows, at most ${off.toFixed(2)}° away, of two equally near to the one nearer the equator; gradients are over the real distances between the rows.`,
    );
  const reversals = choice.index === "one-dimensional" ? choice.lanes[0].reversals : null;
  if (reversals !== null) {
    const triples = Array.from(
      reversals.centre,
      (row, i) => `${reversals.poleward[i]} ${row} ${reversals.equatorward[i]}`,
    );
    const different = new Set(triples).size;
    if (different < triples.length)
      notes.push(
        `On this grid the ${triples.length} offsets fall on ${different === 1 ? "one and the same rows" : `${different} different sets of rows`}.`,
      );
  }
  return notes;
}

function timeNotes(choice: BlockChoice, pieces: RecordPieces, series: Series): string[] {
  const { days, usual, gaps } = pieces;
  const isHeld = choice.index === "anomaly" && choice.persistence > 0;
  const held = isHeld ? " Nor are departures held to a duration: every step stands for itself." : "";
  if (days === null)
    return [
      `The record steps along "${series.steps.name}", which is no time: there are no events, and no frequencies by month.${held}`,
    ];
  if (Number.isNaN(usual)) return [`One step alone has no duration: there are no events.${held}`];
  const notes: string[] = [];
  if (gaps > 0)
    notes.push(
      `The record has ${gaps === 1 ? "a gap" : `${gaps} gaps`} of over 1.5 usual steps (${Number(usual.toFixed(4))} days): what lasts up to ${gaps === 1 ? "it" : "one"} is cut there.`,
    );
  if (usual >= choice.leastDays - DAY_TOLERANCE && choice.leastDays > 0)
    notes.push(
      `Steps are ${Number(usual.toFixed(4))} days apart, so that every blocked step alone lasts the ${choice.leastDays} days of an event.`,
    );
  const { background } = series;
  const isFlat = background.kind === "record-mean" || background.kind === "period-mean";
  if (choice.index === "anomaly" && isFlat && days[days.length - 1] - days[0] > SEASONAL_DAYS)
    notes.push(
      "The background is one mean for all seasons: the annual cycle counts as anomaly. An annual cycle as background leaves it out.",
    );
  return notes;
}

function eventNotes(events: readonly BlockEvent[]): string[] {
  if (events.length === 0) return ["No event lasts and spreads far enough: there is no table of events."];
  const cut = (code: number): number =>
    events.filter(({ onsetCut, endCut }) => onsetCut === code || endCut === code).length;
  const words = (count: number, why: string): string[] =>
    count === 0 ? [] : [`${count} of ${events.length} events ${why}.`];
  return [
    ...words(cut(CUTS.record), "touch the record's first or last step and may have lasted longer"),
    ...words(cut(CUTS.gap), "are cut by a gap in the record"),
    ...words(cut(CUTS.missing), "begin or end beside missing values"),
  ];
}

function finish(parts: readonly ChunkPart[], series: Series, options: OptionValues): Outcome {
  const choice = blockChoice(series, options);
  const frame = new BlockFrame(series, choice);
  const pieces = recordPieces(series);
  const record = new BlockRecord(parts, series, choice);
  const blocked = blockedVariable(record, frame);
  const often = frequencies(record, frame);
  const notes = [...rowNotes(choice), ...timeNotes(choice, pieces, series)];
  if (record.hasUnknown)
    notes.push("Cells that miss a height they need are neither blocked nor free; they are marked.");
  const hasEvents = pieces.days !== null && !Number.isNaN(pieces.usual);
  const events = hasEvents ? blockEvents(record, pieces) : [];
  if (hasEvents) notes.push(...eventNotes(events));
  const tables = eventTables(events, record, pieces, series);
  return {
    coordinates: [...frame.coordinates(), ...often.coordinates, ...tables.coordinates],
    variables: [blocked, ...often.variables, ...tables.variables],
    notes,
  };
}

export const blocking: Diagnostic = {
  id: "blocking",
  title: "Blocking",
  summary:
    "Where and when the westerlies are blocked, how often, and in which events: onset, end, track, size and strength.",
  formula: FORMULA,
  validity:
    "A full circle of evenly spaced longitudes and heights on one level, usually 500 hPa. Angles go to the nearest row, of two equally near to the one nearer the equator, and gradients are over the real distance between the rows. " +
    "A cell that misses a height is unknown. Events need times; duration counts onset and end, and ends at gaps in the record of over 1.5 usual steps. " +
    "Blocks are cells that touch, corners included, at one moment; from step to step the largest overlap inherits the name. " +
    "A run of departures that the record's ends cut short of its least duration is not counted.",
  sources: [
    "Tibaldi & Molteni 1990, Tellus 42A, 343: the index in one dimension",
    "Scherrer et al. 2006, International Journal of Climatology 26, 233: the index in two dimensions",
    "Davini et al. 2012, Journal of Climate 25, 6496: the subtropical condition",
    "Dole & Gordon 1983, Monthly Weather Review 111, 1567: persistent anomalies",
    "Wiedenmann et al. 2002, Journal of Climate 15, 3459: blocking intensity",
  ],
  inputs: [{ name: "field", quantities: ["geopotential_height"], about: "heights of one level" }],
  options: BLOCK_OPTIONS,
  outputs: BLOCK_OUTPUTS,
  tables: { event: "events", event_step: "tracks" },
  plan(series, options) {
    const choice = blockChoice(series, options);
    const usesBackground = choice.index === "anomaly";
    // Neighbours tell whether a departure lasts.
    const halo = usesBackground ? stepsWithin(recordPieces(series), choice.persistence) : 0;
    return { rows: choice.rows, halo, usesBackground };
  },
  chunk: (input, series, options) => blockChunk(input, series, blockChoice(series, options)),
  finish,
};
