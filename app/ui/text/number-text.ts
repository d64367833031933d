const MINUS = "\u2212";
const NARROW_SPACE = "\u202f";

/** A number for the screen: true minus, thousands parted by a narrow space; a dash where it is missing. */
export function numberText(value: number, digits = 0): string {
  if (!Number.isFinite(value)) return "–";
  const rounded = Math.abs(value).toFixed(digits);
  const [whole, fraction] = rounded.split(".");
  const grouped = whole.replace(/\B(?=(\d{3})+$)/g, NARROW_SPACE);
  const sign = value < 0 && Number(rounded) !== 0 ? MINUS : "";
  return `${sign}${grouped}${fraction === undefined ? "" : `.${fraction}`}`;
}

/** With its sign, plus too; zero has none. */
export function signedText(value: number, digits = 0): string {
  const text = numberText(value, digits);
  return Number.isFinite(value) && Number(value.toFixed(digits)) > 0 ? `+${text}` : text;
}

/** Digits behind the point that a quantity's numbers are shown with. */
export function digitsOf(units: string): number {
  return units === "gpm" ? 0 : 1;
}

/** Units as they are written on the screen; exponents come as superscripts. */
export interface UnitPart {
  readonly text: string;
  readonly exponent: string | null;
}

export function unitParts(units: string): UnitPart[] {
  return units.split(" ").map((unit) => {
    const match = /^(.*?[A-Za-z%])(-?\d+)$/.exec(unit);
    return match === null ? { text: unit, exponent: null } : { text: match[1], exponent: match[2].replace("-", MINUS) };
  });
}

/** Units in one line of plain text, as speech and picture names need them. */
export function unitText(units: string): string {
  return units === "m s-1" ? "m/s" : units;
}
