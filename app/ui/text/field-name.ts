import { QUANTITIES } from "../../../core/field/quantity.ts";
import type { FieldDescription } from "../../../core/formats/dataset.ts";

type Named = Pick<FieldDescription, "quantity" | "longName" | "variable">;

/** What a field is called over a figure: `Height`, `Eastward wind`, else its name in the file. */
export function fieldTitle({ quantity, longName, variable }: Named): string {
  if (quantity === "geopotential_height") return "Height";
  if (quantity !== null) return QUANTITIES[quantity].title;
  return longName === "" ? variable : longName;
}

/** What a field is called in a list: its symbol and name; what is not recognised by its variable. */
export function fieldEntry({ quantity, variable }: Named): string {
  return quantity === null ? variable : `${QUANTITIES[quantity].symbol}, ${QUANTITIES[quantity].title.toLowerCase()}`;
}
