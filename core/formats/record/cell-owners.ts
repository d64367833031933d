import type { FieldDescription } from "../dataset.ts";

/** Stands for a cell that no part holds. */
export const NOBODY = -1;

const kept = new WeakMap<FieldDescription, Int32Array>();

/**
 * Which part each step, level and member of a record comes from: of several that hold it, the last.
 *
 * @returns Shape (steps, levels, members), `NOBODY` where there is none. Kept with the description; not to be modified.
 */
export function cellOwners(field: FieldDescription): Int32Array {
  const held = kept.get(field);
  if (held !== undefined) return held;
  const nLevel = field.levels?.length ?? 1;
  const nMember = field.members?.length ?? 1;
  const owners = new Int32Array(field.steps.values.length * nLevel * nMember).fill(NOBODY);
  (field.parts ?? []).forEach((part, p) => {
    for (const step of part.steps)
      for (const level of part.levels)
        for (const member of part.members) owners[(step * nLevel + level) * nMember + member] = p;
  });
  kept.set(field, owners);
  return owners;
}
