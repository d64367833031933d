import type { Attributes, StoredVariable } from "../variable-store.ts";

/** An attribute as text; undefined where it is absent or a number. */
export function textOf(attributes: Attributes, name: string): string | undefined {
  const value = attributes[name];
  return typeof value === "string" ? value.trim() : undefined;
}

/** An attribute as numbers; empty where it is absent or text that is no number. */
export function numbersOf(attributes: Attributes, name: string): readonly number[] {
  const value = attributes[name];
  if (typeof value === "number") return [value];
  if (typeof value === "string") {
    const number = Number(value);
    return value.trim() !== "" && Number.isFinite(number) ? [number] : [];
  }
  return value ?? [];
}

/** What people call a variable. */
export function longName(variable: StoredVariable): string {
  // An empty text says no more than none.
  return textOf(variable.attributes, "long_name") || textOf(variable.attributes, "standard_name") || variable.name;
}
