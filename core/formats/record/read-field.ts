import { DataError } from "../../errors.ts";
import type { Slab } from "../../field/slab.ts";
import type { FieldDescription, FieldPart, OpenFile, SlabRequest } from "../dataset.ts";
import { cellOwners, NOBODY } from "./cell-owners.ts";

function holder(files: readonly OpenFile[], key: string): OpenFile {
  const file = files.find(({ contents }) => contents.fields.some((field) => field.key === key));
  if (file === undefined) throw new DataError("NotFoundError", `${key} is not open here. Open its file again.`);
  return file;
}

/** Own index of a part's axis for an index of the record; −1 where the part lacks it. */
function ownIndex(places: Int32Array, index: number): number {
  let low = 0;
  let high = places.length - 1;
  if (places[0] <= places[high]) {
    while (low < high) {
      const middle = (low + high) >> 1;
      if (places[middle] < index) low = middle + 1;
      else high = middle;
    }
    if (places[low] === index) return low;
  }
  return places.indexOf(index);
}

/** A stretch of steps that come from the same parts, level by level, one after the other. */
interface Stretch {
  readonly from: number;
  to: number;
  /** Part of each level asked for; `NOBODY` where it is missing. */
  readonly owners: readonly number[];
}

/**
 * Read a slab of a field, wherever its steps lie: in one file, or in the parts of a record. What no part holds is NaN.
 *
 * @param files All that is open; each part's file must be among them.
 * @throws As `OpenFile.read` does.
 */
export async function readField(
  files: readonly OpenFile[],
  field: FieldDescription,
  request: SlabRequest,
): Promise<Slab> {
  const { parts } = field;
  if (parts === undefined) return holder(files, field.key).read(field.key, request);
  const owners = cellOwners(field);
  const nLevelAll = field.levels?.length ?? 1;
  const nMember = field.members?.length ?? 1;
  const [t0, t1] = request.times;
  const member = request.member ?? 0;
  const levels = field.levels === null ? [0] : (request.levels ?? Array.from({ length: nLevelAll }, (_, i) => i));
  const inside =
    Number.isInteger(t0) &&
    Number.isInteger(t1) &&
    t0 >= 0 &&
    t0 < t1 &&
    t1 <= field.steps.values.length &&
    levels.length > 0 &&
    levels.every((level) => Number.isInteger(level) && level >= 0 && level < nLevelAll) &&
    Number.isInteger(member) &&
    member >= 0 &&
    member < nMember;
  if (!inside)
    throw new DataError(
      "ShapeError",
      `${field.key}: steps ${request.times}, levels ${levels}, member ${member} are not inside its ${field.steps.values.length} steps, ${nLevelAll} levels, ${nMember} members.`,
    );
  const [r0, r1] = request.rows ?? [0, field.grid.lat.length];
  const plane = (r1 - r0) * field.grid.lon.length;
  const ownersAt = (t: number) => levels.map((level) => owners[(t * nLevelAll + level) * nMember + member] as number);
  const follows = (part: number, t: number): boolean => {
    if (part === NOBODY) return true;
    const { steps } = parts[part] as FieldPart;
    return ownIndex(steps, t) === ownIndex(steps, t - 1) + 1;
  };
  const stretches: Stretch[] = [];
  for (let t = t0; t < t1; t++) {
    const here = ownersAt(t);
    const last = stretches.at(-1);
    if (last !== undefined && here.every((part, i) => part === last.owners[i] && follows(part, t))) last.to = t + 1;
    else stretches.push({ from: t, to: t + 1, owners: here });
  }
  const partRequest = (part: FieldPart, from: number, to: number, wanted: readonly number[]): SlabRequest => ({
    times: [ownIndex(part.steps, from), ownIndex(part.steps, to - 1) + 1],
    rows: [r0, r1],
    ...(field.levels === null ? {} : { levels: wanted.map((level) => ownIndex(part.levels, level)) }),
    member: ownIndex(part.members, member),
  });
  const [only] = stretches;
  if (stretches.length === 1 && only !== undefined) {
    const [owner] = only.owners;
    if (owner !== undefined && owner !== NOBODY && only.owners.every((other) => other === owner)) {
      const part = parts[owner] as FieldPart;
      return holder(files, part.key).read(part.key, { ...partRequest(part, t0, t1, levels), into: request.into });
    }
  }
  const size = (t1 - t0) * levels.length * plane;
  const data = request.into?.length === size ? request.into.fill(Number.NaN) : new Float64Array(size).fill(Number.NaN);
  for (const { from, to, owners: here } of stretches) {
    for (const owner of new Set(here)) {
      if (owner === NOBODY) continue;
      const part = parts[owner] as FieldPart;
      const places = here.flatMap((other, i) => (other === owner ? [i] : []));
      const wanted = places.map((i) => levels[i] as number);
      const slab = await holder(files, part.key).read(part.key, partRequest(part, from, to, wanted));
      for (let t = 0; t < to - from; t++)
        places.forEach((place, i) => {
          const source = (t * places.length + i) * plane;
          data.set(slab.data.subarray(source, source + plane), ((from - t0 + t) * levels.length + place) * plane);
        });
    }
  }
  return {
    quantity: field.quantity,
    units: field.units,
    data,
    shape: [t1 - t0, levels.length, r1 - r0, field.grid.lon.length],
  };
}
