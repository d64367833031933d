import { reasonCode } from "../../field/reasons.ts";
import type { ChunkInput, ChunkPart } from "../entry.ts";
import { partArray } from "../precision.ts";
import { type ActivityFrame, planRows } from "./activity-frame.ts";
import { WaveActivity } from "./wave-activity.ts";

const MISSING = reasonCode("missing");

/** The names under which a chunk leaves its numbers, and which are made only for the option `parts`. */
const SUM = ["activity"] as const;
const PARTS = ["activity", "anticyclonic", "cyclonic"] as const;

/**
 * The activity at the chunk's own steps, and its two parts if asked for, shape (steps, levels, rows of the frame, nLon); and
 * `missing`: 1 for each (step, level, hemisphere) that misses a height.
 */
export function activityChunk(input: ChunkInput, frame: ActivityFrame, hasParts: boolean): ChunkPart {
  const { hemispheres, rows, absence, nLevel, nLon, nTime } = frame;
  const { data, shape } = input.slabs.field;
  const nRow = shape[2];
  const [first] = planRows(frame);
  const planes = (input.times[1] - input.times[0]) * nLevel;
  const skipped = (input.times[0] - input.loaded[0]) * nLevel;
  const plane = rows.length * nLon;
  const whole = nTime * nLevel * plane;
  const made = (hasParts ? PARTS : SUM).map(() => partArray(planes * plane, whole).fill(Number.NaN));
  const missing = new Uint8Array(planes * hemispheres.length);
  hemispheres.forEach((hemisphere, h) => {
    const waves = new WaveActivity(hemisphere, nLon);
    const size = hemisphere.rows.length * nLon;
    const z = new Float64Array(size);
    const ridges = new Float64Array(size);
    const troughs = new Float64Array(size);
    const sum = new Float64Array(size);
    const written = Array.from(hemisphere.rows, (row, j) => ({ j, r: rows.indexOf(row) })).filter(
      ({ r }) => r >= 0 && absence[r] === 0,
    );
    for (let p = 0; p < planes; p++) {
      hemisphere.rows.forEach((row, j) => {
        const from = ((skipped + p) * nRow + row - first) * nLon;
        z.set(data.subarray(from, from + nLon), j * nLon);
      });
      if (!waves.write(z, ridges, troughs)) missing[p * hemispheres.length + h] = 1;
      for (let i = 0; i < size; i++) sum[i] = ridges[i] + troughs[i];
      const from = [sum, ridges, troughs];
      made.forEach((array, k) => {
        for (const { j, r } of written) array.set(from[k].subarray(j * nLon, (j + 1) * nLon), p * plane + r * nLon);
      });
    }
  });
  const [activity, anticyclonic, cyclonic] = made;
  return hasParts ? { activity, anticyclonic, cyclonic, missing } : { activity, missing };
}

/** Reason of each number; null where all are valid. */
export function activityReasons(parts: readonly ChunkPart[], frame: ActivityFrame): Uint8Array | null {
  const { hemispheres, rows, absence, nLevel, nLon, nTime } = frame;
  const isPlain = absence.every((code) => code === 0) && parts.every(({ missing }) => !missing.includes(1));
  if (isPlain) return null;
  const reasons = new Uint8Array(nTime * nLevel * rows.length * nLon);
  const hemisphereOf = rows.map((row) => hemispheres.findIndex((hemisphere) => hemisphere.rows.includes(row)));
  let at = 0;
  for (const { missing } of parts)
    for (let p = 0; p < missing.length / hemispheres.length; p++)
      for (let r = 0; r < rows.length; r++, at += nLon) {
        const code = absence[r] || (missing[p * hemispheres.length + hemisphereOf[r]] === 1 ? MISSING : 0);
        if (code !== 0) reasons.fill(code, at, at + nLon);
      }
  return reasons;
}
