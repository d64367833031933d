import { digitsOf, numberText, signedText, unitText } from "../text/number-text.ts";
import { latitudeText, longitudeText } from "../text/place-text.ts";
import type { Picture } from "./use-picture.ts";

/** The numbers at the cursor in one sentence each: the place and its value, what the leading wave adds, and what all waves add. */
export function cursorWords({ cursor, bars, readings, leader }: Picture, units: string): string[] {
  if (cursor === null) return ["Nothing is read yet."];
  const digits = digitsOf(units);
  const unit = unitText(units);
  const place = `${latitudeText(cursor.lat)} ${longitudeText(cursor.lon, 1)}`;
  const from = cursor.of === "background" ? "the background" : "the zonal mean";
  const value = `${place}: ${numberText(cursor.value, digits)} ${unit}, ${signedText(cursor.sum, digits)} from ${from}.`;
  if (cursor.whyNot !== null) return [value, cursor.whyNot];
  const leading = readings.find(({ k }) => k === leader);
  const share = bars.find(({ k }) => k === leader);
  const lead =
    leading === undefined || share === undefined
      ? []
      : [
          `k ${leading.k}: ${numberText(leading.amplitude, digits)} ${unit}, ridge ${longitudeText(leading.nearestRidge)}; ` +
            `it adds ${signedText(share.value, digits)} of ${signedText(cursor.sum, digits)} ${unit} here.`,
        ];
  const parts = bars.map((bar) => `${bar.label} ${signedText(bar.value, digits)}`).join(", ");
  return [value, ...lead, `All: ${parts}.`];
}
