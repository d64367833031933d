import { DataError } from "../../errors.ts";
import type { GridDefinition } from "./grib-index.ts";
import { gridRefusal, reducedRefusal } from "./grid-types.ts";
import { signed24, signed32, unsigned16, unsigned32 } from "./octets.ts";

/** A grid of 0.025° has a hundred million points; nothing over a fifth of that fits a desk, and damaged headers promise more. */
export const MOST_POINTS = 40_000_000;

const MILLI = 1e-3;
const MICRO = 1e-6;
/** All octets set: not given (FM 92, regulation 92.1.4). */
const MISSING_16 = 0xffff;
const MISSING_32 = 0xffff_ffff;

function refuse(why: string): never {
  throw new DataError("GridError", why);
}

function checked(grid: GridDefinition): GridDefinition {
  const { ni, nj, scan } = grid;
  if (ni < 1 || nj < 1) refuse(`its grid has ${ni} columns and ${nj} rows`);
  if (ni * nj > MOST_POINTS) refuse(`its grid of ${ni} columns and ${nj} rows is too large to be read; thin it out`);
  if ((scan & 0x0f) !== 0) refuse("the points of its rows are offset from one another; regrid it to a regular grid");
  return grid;
}

/**
 * A grid from edition 1's grid description section (FM 92, section 2, data representation types 0 and 4).
 *
 * @param section The section's first 28 octets.
 * @throws GridError, its message the reason why fields on this grid are left out.
 */
export function edition1Grid(section: Uint8Array): GridDefinition {
  const type = section[5] as number;
  if (type !== 0 && type !== 4) refuse(gridRefusal(1, type));
  const isGaussian = type === 4;
  const ni = unsigned16(section, 6);
  const nj = unsigned16(section, 8);
  if (ni === MISSING_16 || nj === MISSING_16) refuse(reducedRefusal(isGaussian));
  const lonStep = unsigned16(section, 23);
  const isStepGiven = ((section[16] as number) & 0x80) !== 0 && lonStep !== MISSING_16;
  return checked({
    kind: isGaussian ? "gaussian" : "regular",
    ni,
    nj,
    firstLat: signed24(section, 10) * MILLI,
    firstLon: signed24(section, 13) * MILLI,
    lastLat: signed24(section, 17) * MILLI,
    lastLon: signed24(section, 20) * MILLI,
    lonStep: isStepGiven ? lonStep * MILLI : null,
    parallels: isGaussian ? unsigned16(section, 25) : 0,
    scan: section[27] as number,
    precision: MILLI,
  });
}

/**
 * A grid from edition 2's section 3 (templates 3.0 and 3.40).
 *
 * @param section The section's first 72 octets.
 * @throws GridError, its message the reason why fields on this grid are left out.
 */
export function edition2Grid(section: Uint8Array): GridDefinition {
  if (section[5] !== 0) refuse(`its grid is number ${section[5]} of a catalogue, not described in the file; regrid it`);
  const type = unsigned16(section, 12);
  if (type !== 0 && type !== 40) refuse(gridRefusal(2, type));
  const isGaussian = type === 40;
  const ni = unsigned32(section, 30);
  const nj = unsigned32(section, 34);
  if ((section[10] as number) !== 0 || ni === MISSING_32 || nj === MISSING_32) refuse(reducedRefusal(isGaussian));
  const basicAngle = unsigned32(section, 38);
  const subdivisions = unsigned32(section, 42);
  const isOwnUnit = basicAngle !== 0 && basicAngle !== MISSING_32 && subdivisions !== 0 && subdivisions !== MISSING_32;
  const unit = isOwnUnit ? basicAngle / subdivisions : MICRO;
  const lonStep = unsigned32(section, 63);
  const isStepGiven = ((section[54] as number) & 0x20) !== 0 && lonStep !== MISSING_32;
  const grid = checked({
    kind: isGaussian ? "gaussian" : "regular",
    ni,
    nj,
    firstLat: signed32(section, 46) * unit,
    firstLon: signed32(section, 50) * unit,
    lastLat: signed32(section, 55) * unit,
    lastLon: signed32(section, 59) * unit,
    lonStep: isStepGiven ? lonStep * unit : null,
    parallels: isGaussian ? unsigned32(section, 67) : 0,
    scan: section[71] as number,
    precision: unit,
  });
  const points = unsigned32(section, 6);
  if (points !== ni * nj) refuse(`its grid of ${ni} columns and ${nj} rows is said to have ${points} points`);
  return grid;
}
