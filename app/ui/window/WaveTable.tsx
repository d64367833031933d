import type { WaveReading } from "../reading/wave-series.ts";
import { digitsOf, numberText, signedText, unitText } from "../text/number-text.ts";
import { longitudeText } from "../text/place-text.ts";
import { type ThemeName, waveColour } from "../theme/tokens.ts";

interface WaveTableProps {
  readonly readings: readonly WaveReading[];
  readonly units: string;
  readonly theme: ThemeName;
  readonly chosen: number | null;
  onChoose(k: number): void;
}

const LEFT_OUT: Readonly<Record<string, string>> = {
  small: "too small",
  ambiguous: "unclear",
  short: "too short",
  missing: "missing",
  no_time: "no time",
};

function driftText(reading: WaveReading): { readonly text: string; readonly isNumber: boolean } {
  const { drift, driftError, driftReason } = reading;
  if (driftReason !== "valid" || !Number.isFinite(drift))
    return { text: LEFT_OUT[driftReason] ?? "–", isNumber: false };
  return {
    text: `${signedText(drift, 1)}${Number.isFinite(driftError) ? ` ± ${numberText(driftError, 1)}` : ""}`,
    isNumber: true,
  };
}

/** The waves of the chosen day in numbers. */
export function WaveTable({ readings, units, theme, chosen, onChoose }: WaveTableProps) {
  const digits = digitsOf(units);
  return (
    <table className="wave-table" data-testid="wave-table">
      <thead>
        <tr>
          <th scope="col">wave</th>
          <th scope="col">{unitText(units)}</th>
          <th scope="col">ridge</th>
          <th scope="col">drift, °/day</th>
          <th scope="col">variance</th>
        </tr>
      </thead>
      <tbody>
        {readings.map((reading) => {
          const { k } = reading;
          const drift = driftText(reading);
          const cell = (name: string, value: number, text: string) => (
            <td data-testid={`wave-${k}-${name}`} data-value={value}>
              {text}
            </td>
          );
          return (
            <tr key={k} data-chosen={k === chosen} onClick={() => onChoose(k)}>
              <th scope="row">
                <i style={{ background: waveColour(k, theme) }} />k {k}
              </th>
              {cell("amplitude", reading.amplitude, numberText(reading.amplitude, digits))}
              {cell(
                "ridge",
                reading.ridge,
                Number.isFinite(reading.nearestRidge) ? longitudeText(reading.nearestRidge) : "–",
              )}
              <td
                data-testid={`wave-${k}-drift`}
                data-value={reading.drift}
                className={drift.isNumber ? "" : "left-out"}
              >
                {drift.text}
              </td>
              {cell(
                "share",
                reading.share,
                Number.isFinite(reading.share) ? `${numberText(100 * reading.share)} %` : "–",
              )}
            </tr>
          );
        })}
      </tbody>
    </table>
  );
}
