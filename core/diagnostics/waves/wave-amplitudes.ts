import { RADIANS_PER_DEGREE } from "../../constants.ts";
import { reasonCode } from "../../field/reasons.ts";
import type { ChunkPart, ResultVariable } from "../entry.ts";
import { partArray } from "../precision.ts";
import { isNyquist, type RowCoefficients, ridgeOfAngle, waveAmplitude } from "./coefficients.ts";
import { joinedNumbers, joinedReasons } from "./series-join.ts";
import type { WaveFrame } from "./wave-frame.ts";

const EACH = ["time", "level", "row", "wavenumber"] as const;
const SMALL = reasonCode("small");

/** Names of a chunk's numbers, in the order in which they are made. */
const PARTS = ["amplitude", "ridge", "share", "phase"] as const;

/**
 * Amplitude, ridge longitude, share of the variance and phase of each wave at each step of a chunk, and why one is missing.
 *
 * For the speeds, `paths` holds the coefficients, shape (places, waves, steps, 2), and `angles` their arguments in radians,
 * shape (places, waves, steps).
 *
 * @param firstRow Row at which the chunk starts, counted over time, level and row of the record.
 */
export function amplitudeParts(
  frame: WaveFrame,
  { c, variance }: RowCoefficients,
  firstRow: number,
): Record<string, ChunkPart[string]> {
  const { waves, nLon, choice } = frame;
  const kept = choice.most + 1;
  const rows = variance.length;
  const size = rows * waves.length;
  const whole = frame.nTime * frame.nLevel * frame.nRow * waves.length;
  const [amplitude, ridge, share, phase] = PARTS.map(() => partArray(size, whole));
  // Speeds need each wave of each place with its steps side by side: laid out here, where the numbers are at hand.
  const places = frame.nLevel * frame.nRow;
  const steps = rows / places;
  const paths = new Float64Array(2 * size);
  const angles = new Float64Array(size);
  const reasons = new Uint8Array(size);
  const phaseReasons = new Uint8Array(size);
  const shareReasons = new Uint8Array(size);
  let careful = 0;
  // Once for each wave of the result, not for each of millions of numbers: A = size · |c|, share = spread · A²/variance.
  const sizes = Float64Array.from(waves, (k) => (k === 0 || isNyquist(k, nLon) ? 1 : 2));
  const spreads = Float64Array.from(waves, (k) => (isNyquist(k, nLon) ? 1 : 0.5));
  const perDegree = 1 / RADIANS_PER_DEGREE;
  const count = waves.length;
  const first = waves[0];
  const step = 2 * kept;
  let place = 0;
  let t = 0;
  for (let r = 0, at = 0; r < rows; r++) {
    const total = variance[r];
    let path = place * count * steps + t;
    let from = r * step + 2 * first;
    for (let w = 0; w < count; w++) {
      const re = c[from];
      const im = c[from + 1];
      from += 2;
      const a = sizes[w] * Math.sqrt(re * re + im * im);
      const angle = Math.atan2(im, re);
      angles[path] = angle;
      paths[2 * path] = re;
      paths[2 * path + 1] = im;
      path += steps;
      amplitude[at] = a;
      share[at] = (spreads[w] * a * a) / total;
      if (a > 0 && total !== 0) {
        const cycle = 360 / (first + w);
        const longitude = (-angle * perDegree) / (first + w);
        ridge[at] = longitude < 0 ? (longitude + cycle < cycle ? longitude + cycle : 0) : longitude;
        phase[at] = angle * perDegree;
      } else {
        ridge[at] = a === 0 ? Number.NaN : ridgeOfAngle(angle, first + w);
        phase[at] = a === 0 ? Number.NaN : angle * perDegree;
        const absent = Number.isNaN(a) ? frame.absence(firstRow + r, choice.ofAnomaly) : 0;
        reasons[at] = absent;
        // A wave of nothing has no ridge, and a row of one value (a pole) no variance to share.
        phaseReasons[at] = a === 0 ? SMALL : absent;
        shareReasons[at] = total === 0 ? SMALL : absent;
        careful += phaseReasons[at] | shareReasons[at];
      }
      at += 1;
    }
    place += 1;
    if (place === places) {
      place = 0;
      t += 1;
    }
  }
  const made = { amplitude, ridge, share, phase, paths, angles };
  // Where every number is plain, which is the rule, there is nothing to hand over.
  return careful === 0 ? made : { ...made, reasons, phaseReasons, shareReasons };
}

/** The chunks' amplitudes, ridges, shares and phases as variables of the record. */
export function amplitudeVariables(frame: WaveFrame, parts: readonly ChunkPart[]): ResultVariable[] {
  const numbers = (name: string) => joinedNumbers(parts, name);
  const [reasons, phaseReasons, shareReasons] = ["reasons", "phaseReasons", "shareReasons"].map((name) =>
    joinedReasons(parts, name, "amplitude"),
  );
  const { units } = frame.series;
  return [
    frame.variable("amplitude", "Amplitude", units, EACH, numbers("amplitude"), reasons),
    frame.variable("ridge_longitude", "Ridge longitude", "degrees_east", EACH, numbers("ridge"), phaseReasons),
    frame.variable(
      "variance_share",
      "Share of the variance along the circle",
      "1",
      EACH,
      numbers("share"),
      shareReasons,
    ),
    frame.variable("phase", "Phase, the argument of the coefficient", "degrees", EACH, numbers("phase"), phaseReasons),
  ];
}

/** Incoherent band: means over the rows of amplitude and of variance; phases do not count, so there is no ridge. */
export function incoherentVariables(frame: WaveFrame, c: Float64Array, variance: Float64Array): ResultVariable[] {
  const { waves, nLon, choice, weights } = frame;
  const kept = choice.most + 1;
  const nRows = weights.length;
  const steps = variance.length / nRows;
  const size = steps * waves.length;
  const amplitude = frame.array(size);
  const share = frame.array(size);
  const reasons = new Uint8Array(size);
  const shareReasons = new Uint8Array(size);
  for (let s = 0, at = 0; s < steps; s++) {
    for (const k of waves) {
      let a = 0;
      let own = 0;
      let total = 0;
      for (let r = 0; r < nRows; r++) {
        const w = weights[r] as number;
        const from = 2 * ((s * nRows + r) * kept + k);
        const size1 = waveAmplitude(c[from] as number, c[from + 1] as number, k, nLon);
        a += w * size1;
        own += w * (isNyquist(k, nLon) ? size1 * size1 : (size1 * size1) / 2);
        total += w * (variance[s * nRows + r] as number);
      }
      amplitude[at] = a;
      share[at] = own / total;
      reasons[at] = Number.isNaN(a) ? frame.absence(s, choice.ofAnomaly) : 0;
      shareReasons[at] = total === 0 ? SMALL : reasons[at];
      at += 1;
    }
  }
  return [
    frame.variable("amplitude", "Mean amplitude of the band's rows", frame.series.units, EACH, amplitude, reasons),
    frame.variable("variance_share", "Share of the variance along the circles", "1", EACH, share, shareReasons),
  ];
}
