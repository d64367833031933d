import type { BlockRecord } from "./block-record.ts";
import { RUN } from "./blocked-runs.ts";
import { DAY_TOLERANCE, inclusiveDays, type RecordPieces } from "./record-pieces.ts";

/** Why an event may have begun earlier or ended later than it shows. */
export const CUTS = { none: 0, record: 1, gap: 2, missing: 3 } as const;

/** One block followed over time. */
export interface BlockEvent {
  readonly lane: number;
  /** Steps at which it is there, rising; of the selection. */
  readonly steps: readonly number[];
  /** Its block at each. */
  readonly blocks: readonly number[];
  /** Onset to end, both counted. */
  readonly days: number;
  readonly onsetCut: number;
  readonly endCut: number;
}

interface Track {
  readonly order: number;
  readonly steps: number[];
  readonly blocks: number[];
}

interface Match {
  readonly track: Track;
  readonly block: number;
  readonly shared: number;
}

/** Cells that each block of one step shares with each of another, shape (blocks of `before`, blocks of `place`). */
function sharedCells(record: BlockRecord, before: number, place: number): Int32Array {
  const { runs, runFrom, blockFrom } = record;
  const width = blockFrom[place + 1] - blockFrom[place];
  const shared = new Int32Array((blockFrom[before + 1] - blockFrom[before]) * width);
  if (shared.length === 0) return shared;
  let a = RUN * runFrom[before];
  let b = RUN * runFrom[place];
  const endA = RUN * runFrom[before + 1];
  const endB = RUN * runFrom[place + 1];
  // Both lists run row by row, west to east.
  while (a < endA && b < endB) {
    const rows = runs[a] - runs[b];
    if (rows === 0) {
      const common = Math.min(runs[a + 2], runs[b + 2]) - Math.max(runs[a + 1], runs[b + 1]);
      if (common > 0 && runs[a + 3] >= 0 && runs[b + 3] >= 0) shared[runs[a + 3] * width + runs[b + 3]] += common;
    }
    if (rows < 0 || (rows === 0 && runs[a + 2] <= runs[b + 2])) a += RUN;
    else b += RUN;
  }
  return shared;
}

/** Tracks of one hemisphere: who is whose successor, from step to step. */
function laneTracks(record: BlockRecord, pieces: RecordPieces, lane: number): Track[] {
  const { gapSteps, leastOverlap } = record.choice;
  const tracks: Track[] = [];
  let alive: Track[] = [];
  for (let t = 0; t < record.nTime; t++) {
    if (pieces.begins[t] === 1) alive = [];
    const place = record.place(t, lane);
    const from = record.blockFrom[place];
    const to = record.blockFrom[place + 1];
    const matches: Match[] = [];
    // Without gaps survived all tracks are of the step before.
    const shares = new Map<number, Int32Array>();
    for (const track of alive) {
      const last = track.steps.length - 1;
      const before = record.place(track.steps[last], lane);
      let shared = shares.get(before);
      if (shared === undefined) {
        shared = sharedCells(record, before, place);
        shares.set(before, shared);
      }
      const row = (track.blocks[last] - record.blockFrom[before]) * (to - from);
      for (let block = 0; block < to - from; block++)
        if (shared[row + block] >= leastOverlap)
          matches.push({ track, block: from + block, shared: shared[row + block] });
    }
    // The largest overlap inherits the name; of equal ones the older event, then the block met first.
    matches.sort((a, b) => b.shared - a.shared || a.track.order - b.track.order || a.block - b.block);
    const owner = new Map<number, Track>();
    const gone = new Set<Track>();
    for (const { track, block } of matches)
      if (!owner.has(block) && !gone.has(track)) {
        owner.set(block, track);
        gone.add(track);
      }
    for (let block = from; block < to; block++) {
      let track = owner.get(block);
      if (track === undefined) {
        track = { order: tracks.length, steps: [], blocks: [] };
        tracks.push(track);
        alive.push(track);
      }
      track.steps.push(t);
      track.blocks.push(block);
    }
    alive = alive.filter(({ steps }) => t - steps[steps.length - 1] <= gapSteps);
  }
  return tracks;
}

/**
 * Events: blocks that share cells from step to step, for long enough.
 *
 * From step to step pairs of blocks are taken in the order of the cells they share; each block has one successor and one
 * predecessor at most, so that the largest overlap inherits the name, what splits off is a new event, and of two that merge
 * one ends. A gap in the record ends every event.
 *
 * @returns In the order of onset; at one step the northern hemisphere first, then in the order in which blocks are met.
 */
export function blockEvents(record: BlockRecord, pieces: RecordPieces): BlockEvent[] {
  const { leastDays, gapSteps, lanes } = record.choice;
  // First and last step of the piece of record around each step.
  const first = new Int32Array(record.nTime);
  const last = new Int32Array(record.nTime);
  for (let t = 0; t < record.nTime; t++) first[t] = pieces.begins[t] === 1 ? t : first[t - 1];
  for (let t = record.nTime - 1; t >= 0; t--)
    last[t] = t === record.nTime - 1 || pieces.begins[t + 1] === 1 ? t : last[t + 1];
  const events = lanes.flatMap((_, lane) =>
    laneTracks(record, pieces, lane).flatMap(({ steps, blocks }): BlockEvent[] => {
      const onset = steps[0];
      const end = steps[steps.length - 1];
      const days = inclusiveDays(pieces, onset, end);
      if (!(days >= leastDays - DAY_TOLERANCE)) return [];
      const cut = (step: number, block: number, edge: number, isRecordsEnd: boolean, beyond: number): number => {
        // A block that may be gone for some steps may have been there on the far side of the edge.
        if (Math.abs(step - edge) <= gapSteps) return isRecordsEnd ? CUTS.record : CUTS.gap;
        return record.isBesideUnknown(block, step, lane, beyond) ? CUTS.missing : CUTS.none;
      };
      return [
        {
          lane,
          steps,
          blocks,
          days,
          onsetCut: cut(onset, blocks[0], first[onset], first[onset] === 0, onset - 1),
          endCut: cut(end, blocks[blocks.length - 1], last[end], last[end] === record.nTime - 1, end + 1),
        },
      ];
    }),
  );
  return events.sort((a, b) => a.steps[0] - b.steps[0] || a.lane - b.lane || a.blocks[0] - b.blocks[0]);
}
