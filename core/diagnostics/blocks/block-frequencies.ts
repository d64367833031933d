import { dateOf } from "../../field/calendar.ts";
import { reasonCode } from "../../field/reasons.ts";
import type { Coordinate, ResultVariable } from "../entry.ts";
import type { BlockFrame } from "./block-frame.ts";
import type { BlockRecord } from "./block-record.ts";
import { RUN } from "./blocked-runs.ts";
import { BLOCKED, UNKNOWN } from "./reversal.ts";

const MISSING = reasonCode("missing");
const MONTHS = 12;
const SEASONS = 4;

/** Blocked or not, at every step: 1, 0, or 255 with a reason where it is unknown. */
export function blockedVariable(record: BlockRecord, frame: BlockFrame): ResultVariable {
  const { cells, nTime } = frame;
  const { runs, runFrom, choice } = record;
  const data = new Uint8Array(nTime * cells);
  for (let t = 0; t < nTime; t++)
    for (let lane = 0; lane < choice.lanes.length; lane++) {
      const place = record.place(t, lane);
      for (let r = runFrom[place]; r < runFrom[place + 1]; r++) {
        const row = t * cells + frame.cellOf(lane, runs[RUN * r]);
        data.fill(BLOCKED, row + runs[RUN * r + 1], row + runs[RUN * r + 2]);
      }
    }
  const title = "Blocked at this moment: 1 yes, 0 no";
  if (!record.hasUnknown) return frame.variable("blocked", title, ["time", nTime], data, null);
  const reasons = new Uint8Array(data.length);
  record.eachUnknown((t, lane, cell) => {
    const row = Math.floor(cell / frame.nLon);
    const at = t * cells + frame.cellOf(lane, row) + cell - row * frame.nLon;
    data[at] = UNKNOWN;
    reasons[at] = frame.absence(t);
  });
  return frame.variable("blocked", title, ["time", nTime], data, reasons);
}

/** Blocked and unknown steps of each cell in each class of steps, shape (classes, cells), and the steps of each class. */
interface Counts {
  readonly blocked: Int32Array;
  readonly unknown: Int32Array;
  readonly steps: Int32Array;
}

function counted(record: BlockRecord, frame: BlockFrame, classes: Int32Array, nClass: number): Counts {
  const { cells, nLon, nTime } = frame;
  const { runs, runFrom, choice } = record;
  const blocked = new Int32Array(nClass * cells);
  const unknown = new Int32Array(nClass * cells);
  const steps = new Int32Array(nClass);
  for (let t = 0; t < nTime; t++) {
    steps[classes[t]] += 1;
    for (let lane = 0; lane < choice.lanes.length; lane++) {
      const place = record.place(t, lane);
      for (let r = runFrom[place]; r < runFrom[place + 1]; r++) {
        const row = classes[t] * cells + frame.cellOf(lane, runs[RUN * r]);
        for (let i = row + runs[RUN * r + 1]; i < row + runs[RUN * r + 2]; i++) blocked[i] += 1;
      }
    }
  }
  record.eachUnknown((t, lane, cell) => {
    const row = Math.floor(cell / nLon);
    unknown[classes[t] * cells + frame.cellOf(lane, row) + cell - row * nLon] += 1;
  });
  return { blocked, unknown, steps };
}

/** Counts of classes put together. @param groupOf Of each class. */
function grouped(counts: Counts, cells: number, groupOf: readonly number[], groups: number): Counts {
  const blocked = new Int32Array(groups * cells);
  const unknown = new Int32Array(groups * cells);
  const steps = new Int32Array(groups);
  groupOf.forEach((group, k) => {
    steps[group] += counts.steps[k];
    for (let c = 0; c < cells; c++) {
      blocked[group * cells + c] += counts.blocked[k * cells + c];
      unknown[group * cells + c] += counts.unknown[k * cells + c];
    }
  });
  return { blocked, unknown, steps };
}

/** Share of the steps at which a cell is blocked, of those at which that is known. */
function shareVariable(
  frame: BlockFrame,
  name: string,
  title: string,
  dim: string | null,
  { blocked, unknown, steps }: Counts,
): ResultVariable {
  const { cells } = frame;
  const share = new Float64Array(blocked.length);
  let reasons: Uint8Array | null = null;
  for (let k = 0, at = 0; k < steps.length; k++)
    for (let c = 0; c < cells; c++, at++) {
      // 0/0 is NaN: no step at which it is known.
      share[at] = blocked[at] / (steps[k] - unknown[at]);
      if (!Number.isNaN(share[at])) continue;
      reasons ??= new Uint8Array(share.length);
      reasons[at] = MISSING;
    }
  return frame.variable(name, title, dim === null ? null : [dim, steps.length], share, reasons);
}

/** How often cells are blocked: over the record, and on a time axis by calendar month and by season. */
export function frequencies(
  record: BlockRecord,
  frame: BlockFrame,
): { readonly variables: ResultVariable[]; readonly coordinates: Coordinate[] } {
  const { steps, times } = frame.series;
  const { cells } = frame;
  const title = "Share of the steps that are blocked";
  if (steps.kind !== "time") {
    const counts = counted(record, frame, new Int32Array(frame.nTime), 1);
    return { variables: [shareVariable(frame, "frequency", title, null, counts)], coordinates: [] };
  }
  const months = Int32Array.from(
    steps.values.subarray(times[0], times[1]),
    (days) => dateOf(days, steps.calendar).month - 1,
  );
  const monthly = counted(record, frame, months, MONTHS);
  const every = Array.from({ length: MONTHS }, (_, month) => month);
  const whole = grouped(
    monthly,
    cells,
    every.map(() => 0),
    1,
  );
  const seasonal = grouped(
    monthly,
    cells,
    every.map((month) => Math.floor(((month + 1) % MONTHS) / 3)),
    SEASONS,
  );
  const numbered = (name: string, size: number, words: string): Coordinate => ({
    name,
    values: Float64Array.from({ length: size }, (_, i) => i + 1),
    units: "1",
    attributes: { long_name: words },
  });
  const seasons = "season: 1 December to February, 2 March to May, 3 June to August, 4 September to November";
  return {
    variables: [
      shareVariable(frame, "frequency", title, null, whole),
      shareVariable(frame, "frequency_month", `${title}, by calendar month`, "month", monthly),
      shareVariable(frame, "frequency_season", `${title}, by season`, "season", seasonal),
    ],
    coordinates: [numbered("month", MONTHS, "calendar month"), numbered("season", SEASONS, seasons)],
  };
}
