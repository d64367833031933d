import { RADIANS_PER_DEGREE } from "../../constants.ts";
import { reasonCode } from "../../field/reasons.ts";
import type { ResultVariable } from "../entry.ts";
import { isNyquist, ridgeLongitude, waveAmplitude } from "./coefficients.ts";
import type { WaveFrame } from "./wave-frame.ts";

const EACH = ["time", "level", "row", "wavenumber"] as const;
const SMALL = reasonCode("small");

/**
 * Interference of the anomaly's waves with the background's stationary ones.
 *
 * Zonal covariance 2 Re(c_k^anom · conj c_k^clim) (once for the Nyquist wave); in the variance of their sum it counts twice.
 * Source: Smith & Kushner 2012, J. Geophys. Res.
 */
export function interferenceVariables(
  frame: WaveFrame,
  anomaly: Float64Array,
  background: Float64Array,
): ResultVariable[] {
  const { waves, nLon, choice } = frame;
  const { units } = frame.series;
  const kept = choice.most + 1;
  const rows = anomaly.length / (2 * kept);
  const size = rows * waves.length;
  const covariance = frame.array(size);
  const angle = frame.array(size);
  const amplitude = frame.array(size);
  const ridge = frame.array(size);
  const [reasons, angleReasons, backgroundReasons, ridgeReasons] = Array.from(
    { length: 4 },
    () => new Uint8Array(size),
  ) as [Uint8Array, Uint8Array, Uint8Array, Uint8Array];
  for (let r = 0, at = 0; r < rows; r++) {
    for (const k of waves) {
      const i = 2 * (r * kept + k);
      const ar = anomaly[i];
      const ai = anomaly[i + 1];
      const br = background[i];
      const bi = background[i + 1];
      const re = ar * br + ai * bi;
      const im = ai * br - ar * bi;
      covariance[at] = (isNyquist(k, nLon) ? 1 : 2) * re;
      amplitude[at] = waveAmplitude(br, bi, k, nLon);
      ridge[at] = ridgeLongitude(br, bi, k);
      // Where either wave is nothing there is no angle between them.
      angle[at] = re === 0 && im === 0 ? Number.NaN : Math.atan2(im, re) / RADIANS_PER_DEGREE;
      if (Number.isNaN(re)) reasons[at] = frame.absence(r, true);
      if (Number.isNaN(br)) backgroundReasons[at] = frame.absence(r, true);
      angleReasons[at] = re === 0 && im === 0 ? SMALL : reasons[at];
      ridgeReasons[at] = amplitude[at] === 0 ? SMALL : backgroundReasons[at];
      at += 1;
    }
  }
  const covarianceTitle = "Zonal covariance of the anomaly's wave with the background's";
  const angleTitle = "Phase of the anomaly's wave less the background's";
  const amplitudeTitle = "Amplitude of the background's wave";
  const ridgeTitle = "Ridge longitude of the background's wave";
  return [
    frame.variable("interference", covarianceTitle, squared(units), EACH, covariance, reasons),
    frame.variable("interference_phase", angleTitle, "degrees", EACH, angle, angleReasons),
    frame.variable("background_amplitude", amplitudeTitle, units, EACH, amplitude, backgroundReasons),
    frame.variable("background_ridge_longitude", ridgeTitle, "degrees_east", EACH, ridge, ridgeReasons),
  ];
}

/** Units of a product of two numbers in `units`: `m s-1` → `m2 s-2`. */
function squared(units: string): string {
  return units
    .split(" ")
    .map((unit) => {
      const match = /^([a-zA-Z]+)(-?\d+)?$/.exec(unit);
      return match === null ? unit : `${match[1]}${2 * Number(match[2] ?? 1)}`;
    })
    .join(" ");
}
