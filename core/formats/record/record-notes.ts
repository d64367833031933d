import { stepText } from "../../field/step-text.ts";
import type { FieldDescription, FieldPart } from "../dataset.ts";
import { cellOwners, NOBODY } from "./cell-owners.ts";
import { usualStep } from "./record-axes.ts";

/** A step over more than this many usual ones is a gap: months are of 28 to 31 days. */
const GAP = 1.5;
const MOST_TOLD = 3;

function listed(words: readonly string[], what: string): string {
  const more = words.length - MOST_TOLD;
  return `${words.slice(0, MOST_TOLD).join("; ")}${more > 0 ? `; and ${more} more ${what}` : ""}`;
}

/** Which files hold the same fields, and which of them is used. */
export function overlapNotes(field: FieldDescription): string[] {
  const parts = field.parts ?? [];
  const owners = cellOwners(field);
  const nLevel = field.levels?.length ?? 1;
  const nMember = field.members?.length ?? 1;
  return parts.flatMap((part, p) => {
    const winners = new Map<number, number>();
    for (const step of part.steps)
      for (const level of part.levels)
        for (const member of part.members) {
          const owner = owners[(step * nLevel + level) * nMember + member] as number;
          if (owner !== p) winners.set(owner, (winners.get(owner) ?? 0) + 1);
        }
    return [...winners].map(([owner, count]) => {
      const winner = parts[owner] as FieldPart;
      return `${count} field${count === 1 ? " is" : "s are"} in both ${part.key} and ${winner.key}; ${winner.key} is used, for its name sorts last.`;
    });
  });
}

/** Times that are missing at the record's usual step, and levels or members that only some steps have. */
export function recordGaps(field: FieldDescription): string[] {
  const { steps } = field;
  const notes: string[] = [];
  const usual = usualStep(steps);
  if (usual !== null) {
    const gaps: string[] = [];
    for (let i = 1; i < steps.values.length; i++)
      if (steps.values[i] - steps.values[i - 1] > GAP * usual)
        gaps.push(`${stepText(steps, i - 1)} to ${stepText(steps, i)}`);
    if (gaps.length > 0)
      notes.push(
        `${field.key} has ${gaps.length === 1 ? "a gap" : `${gaps.length} gaps`}: nothing between ${listed(gaps, "gaps")}.`,
      );
  }
  const holes: string[] = [];
  const owners = cellOwners(field);
  const nLevel = field.levels?.length ?? 1;
  const nMember = field.members?.length ?? 1;
  for (let level = 0; level < nLevel; level++)
    for (let member = 0; member < nMember; member++) {
      let missing = 0;
      let first = -1;
      for (let step = 0; step < steps.values.length; step++)
        if (owners[(step * nLevel + level) * nMember + member] === NOBODY) {
          missing += 1;
          if (first < 0) first = step;
        }
      if (missing === 0) continue;
      const where = [
        field.levels === null ? "" : `${field.levels[level]} hPa`,
        field.members === null ? "" : `member ${field.members[member]}`,
      ].filter((words) => words !== "");
      holes.push(`${where.join(", ")} at ${missing} of ${steps.values.length} steps, first ${stepText(steps, first)}`);
    }
  if (holes.length > 0)
    notes.push(`${field.key} is not whole; there is no ${listed(holes, "such holes")}. These read as missing.`);
  return notes;
}
