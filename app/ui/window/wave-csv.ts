import type { WaveReading } from "../reading/wave-series.ts";

/** The wave table of one step as CSV, in full digits. */
export function waveCsv(readings: readonly WaveReading[], when: string, along: string, units: string): string {
  const number = (value: number): string => (Number.isFinite(value) ? String(value) : "");
  const head = `step,latitude,wavenumber,amplitude (${units}),ridge_longitude (degrees_east),drift (degrees_east day-1),drift_error (degrees_east day-1),drift_reason,variance_share`;
  const rows = readings.map(({ k, amplitude, ridge, drift, driftError, driftReason, share }) =>
    [
      when,
      along,
      k,
      number(amplitude),
      number(ridge),
      number(drift),
      number(driftError),
      driftReason === "valid" ? "" : driftReason,
      number(share),
    ].join(","),
  );
  return `${[head, ...rows].join("\n")}\n`;
}
