/** What anomalies are departures from; stands in the recipe and in the case as written here. */
export type BackgroundSpec =
  | { readonly kind: "none" }
  /** Mean over the whole record. */
  | { readonly kind: "record-mean" }
  /** Mean over the steps from `from` to `to`, both included (ISO 8601 dates; on a record that is not a time, its numbers). */
  | { readonly kind: "period-mean"; readonly from: string; readonly to: string }
  /** Mean and `harmonics` waves of the year, by least squares. */
  | { readonly kind: "annual-cycle"; readonly harmonics: number }
  /** Centred running mean over `days`. */
  | { readonly kind: "running-mean"; readonly days: number };

export const NO_BACKGROUND: BackgroundSpec = { kind: "none" };
