import type { ChunkPart, Coordinate, Diagnostic, OptionValues, Outcome, ResultVariable, Series } from "./entry.ts";
import { joinedParts } from "./waves/series-join.ts";
import { amplitudeVariables, incoherentVariables } from "./waves/wave-amplitudes.ts";
import { planRows, waveChunk } from "./waves/wave-chunk.ts";
import { interferenceVariables, reconstructionVariable, shareVariable } from "./waves/wave-extras.ts";
import { WaveFrame } from "./waves/wave-frame.ts";
import { waveChoice } from "./waves/wave-options.ts";
import { driftVariables, LEAST_SHARE, speedVariables } from "./waves/wave-speeds.ts";

const FORMULA =
  "<mrow><msub><mi>c</mi><mi>k</mi></msub><mo>=</mo><mfrac><mn>1</mn><mi>N</mi></mfrac><munder><mo>∑</mo><mi>n</mi></munder>" +
  "<mi>x</mi><mo>(</mo><msub><mi>λ</mi><mi>n</mi></msub><mo>)</mo><msup><mi>e</mi><mrow><mo>−</mo><mi>i</mi><mi>k</mi><msub><mi>λ</mi><mi>n</mi></msub></mrow></msup>" +
  "<mo>,</mo><mspace width='1em'/><msub><mi>A</mi><mi>k</mi></msub><mo>=</mo><mn>2</mn><mo>|</mo><msub><mi>c</mi><mi>k</mi></msub><mo>|</mo>" +
  "<mo>,</mo><mspace width='1em'/><msub><mi>λ</mi><mi>k</mi></msub><mo>=</mo><mo>−</mo><mfrac><mrow><mi>arg</mi><msub><mi>c</mi><mi>k</mi></msub></mrow><mi>k</mi></mfrac></mrow>";

const EACH = ["time", "level", "latitude or band", "wavenumber"];
const WHOLE = ["level", "latitude or band", "wavenumber"];

function finish(parts: readonly ChunkPart[], series: Series, options: OptionValues): Outcome {
  const choice = waveChoice(series, options);
  const frame = new WaveFrame(series, choice);
  const notes: string[] = [];
  const coordinates: Coordinate[] = frame.coordinates();
  const c = joinedParts(parts, "c");
  const variance = joinedParts(parts, "variance");
  const incoherent = choice.band !== null && !choice.coherent;
  const variables: ResultVariable[] = [];
  if (incoherent) {
    variables.push(...incoherentVariables(frame, c, variance));
    notes.push(
      "The band is an incoherent mean: rows are averaged after their amplitudes are taken, so there is no ridge, phase or speed.",
    );
  } else {
    variables.push(...amplitudeVariables(frame, c, variance), ...speedVariables(frame, c, notes));
    if (choice.driftDays > 0) variables.push(...driftVariables(frame, c, variance));
    const background = parts[0]?.background === undefined ? null : joinedParts(parts, "background");
    if (background !== null)
      variables.push(...interferenceVariables(frame, choice.ofAnomaly ? c : joinedParts(parts, "anomaly"), background));
    if (choice.reconstruct !== null) {
      const made = reconstructionVariable(frame, c);
      variables.push(made.variable);
      coordinates.push(made.longitude);
    }
  }
  if (choice.point !== null) {
    const made = shareVariable(frame, joinedParts(parts, "pointC"), joinedParts(parts, "pointValue"));
    variables.push(made.variable);
    coordinates.push(made.coordinate);
  }
  if (variables.some(({ data, dims }) => dims.includes("time") && data instanceof Float32Array))
    notes.push("Numbers of every row and step are kept to seven digits (float32), for there are over a million.");
  const missing = variables[0]?.reasons?.some((code) => code !== 0) ?? false;
  if (missing) notes.push("Rows that miss a value have no waves; they are marked missing.");
  return { coordinates, variables, notes };
}

export const zonalWaves: Diagnostic = {
  id: "zonal-waves",
  title: "Zonal waves",
  summary:
    "Which waves along a latitude circle make the field: how large each is, where its ridges lie, and how it moves.",
  formula: FORMULA,
  validity:
    "A full circle of evenly spaced longitudes without a missing value in the row. Speeds need times; they are ambiguous where a ridge moves over 0.8 of half its own wavelength from one step to the next. " +
    `A drift is left out for a wave with under ${100 * LEAST_SHARE} % of the variance along the circle. The wave whose crests lie two columns apart has no speed.`,
  sources: [
    "Fourier series along a latitude circle: common practice",
    "Draper & Smith 1998, Applied Regression Analysis, chapter 9: weighted least squares and its standard error",
    "Smith & Kushner 2012, Journal of Geophysical Research: linear interference",
  ],
  inputs: [{ name: "field", quantities: "any", about: "the field that is taken apart" }],
  options: [
    {
      name: "band",
      kind: "range",
      title: "Band",
      units: "degrees_north",
      default: null,
      min: -90,
      max: 90,
      about: "South and north edge; equal edges mean the nearest row; none means every row of the grid.",
    },
    {
      name: "waves",
      kind: "range",
      title: "Waves",
      default: [1, 6],
      min: 1,
      max: 1440,
      integer: true,
      about: "First and last zonal wavenumber; what the grid cannot carry is cut off.",
    },
    {
      name: "of",
      kind: "choice",
      title: "Waves of",
      default: "field",
      choices: [
        { value: "field", title: "the field" },
        { value: "anomaly", title: "its departure from the background" },
      ],
      about: "Whether the field itself is taken apart or its departure from the recipe's background.",
    },
    {
      name: "average",
      kind: "choice",
      title: "Mean over the band",
      default: "coherent",
      choices: [
        { value: "coherent", title: "of the field, so that phases count" },
        { value: "incoherent", title: "of the rows' amplitudes" },
      ],
      about: "Coherent: the band's rows are averaged first, by area. Incoherent: their amplitudes are.",
    },
    {
      name: "amplitude_floor",
      kind: "number",
      title: "Amplitude floor",
      default: 0.25,
      min: 0,
      max: 1,
      about: "Steps whose amplitude is under this share of its mean are left out of a speed.",
    },
    {
      name: "drift_days",
      kind: "number",
      title: "Drift over",
      units: "days",
      default: 0,
      min: 0,
      max: 365,
      about: "Days up to each step from which its drift is told; 0 for no drift.",
    },
    {
      name: "reconstruct",
      kind: "list",
      title: "Reconstruct from",
      default: null,
      min: 0,
      max: 1440,
      integer: true,
      about: "Waves from which the field is put together again; 0 is the zonal mean.",
    },
    {
      name: "point",
      kind: "list",
      title: "Shares at",
      units: "degrees north, degrees east",
      default: null,
      min: -180,
      max: 360,
      about: "Latitude and longitude of a point; the share of each wave in the value there is written.",
    },
  ],
  outputs: [
    {
      name: "amplitude",
      title: "Amplitude",
      units: "input",
      dims: EACH,
      about: "Half the difference from ridge to trough.",
    },
    {
      name: "ridge_longitude",
      title: "Ridge longitude",
      units: "degrees_east",
      dims: EACH,
      about: "The first of the wave's ridges east of 0°; the others follow every 360°/k.",
    },
    {
      name: "variance_share",
      title: "Share of the variance",
      units: "1",
      dims: EACH,
      about: "Of the variance along the circle; all waves together make 1.",
    },
    { name: "phase", title: "Phase", units: "degrees", dims: EACH, about: "Argument of the Fourier coefficient." },
    {
      name: "phase_speed",
      title: "Phase speed",
      units: "degrees_east day-1",
      dims: WHOLE,
      about: "Regression of the ridge's longitude on time, weighted by the squared amplitude.",
    },
    {
      name: "phase_speed_error",
      title: "Standard error of the phase speed",
      units: "degrees_east day-1",
      dims: WHOLE,
      about: "From the scatter about the regression line.",
    },
    {
      name: "phase_speed_ms",
      title: "Phase speed in metres",
      units: "m s-1",
      dims: WHOLE,
      about: "The same along the row's circle.",
    },
    {
      name: "lag_one_speed",
      title: "Lag-one phase speed",
      units: "degrees_east day-1",
      dims: WHOLE,
      about: "From the mean turn of the coefficient in one step; needs even steps, no unwrapping.",
    },
    {
      name: "stationarity_ratio",
      title: "Stationarity ratio",
      units: "1",
      dims: WHOLE,
      about: "1 stands still, towards 0 only travels.",
    },
    {
      name: "drift",
      title: "Drift",
      units: "degrees_east day-1",
      dims: EACH,
      about: "Phase speed over the days up to each step.",
      when: "drift_days is over 0",
    },
    {
      name: "drift_error",
      title: "Standard error of the drift",
      units: "degrees_east day-1",
      dims: EACH,
      about: "From the scatter about its regression line.",
      when: "drift_days is over 0",
    },
    {
      name: "interference",
      title: "Interference",
      units: "input squared",
      dims: EACH,
      about: "Zonal covariance of the anomaly's wave with the background's; positive builds the standing wave up.",
      when: "the recipe has a background",
    },
    {
      name: "interference_phase",
      title: "Phase difference",
      units: "degrees",
      dims: EACH,
      about: "Anomaly's wave less the background's.",
      when: "the recipe has a background",
    },
    {
      name: "background_amplitude",
      title: "Background's amplitude",
      units: "input",
      dims: EACH,
      about: "Amplitude of the background's wave.",
      when: "the recipe has a background",
    },
    {
      name: "background_ridge_longitude",
      title: "Background's ridge",
      units: "degrees_east",
      dims: EACH,
      about: "Ridge longitude of the background's wave.",
      when: "the recipe has a background",
    },
    {
      name: "reconstruction",
      title: "Reconstruction",
      units: "input",
      dims: ["time", "level", "latitude or band", "longitude"],
      about: "The field of the chosen waves.",
      when: "reconstruct names waves",
    },
    {
      name: "share",
      title: "Share at a point",
      units: "input",
      dims: ["time", "level", "wave_or_rest"],
      about: "What each wave, the zonal mean (0) and all shorter waves (last) add to the value there.",
      when: "point is given",
    },
  ],
  plan(series, options) {
    const choice = waveChoice(series, options);
    const rows = planRows(series, choice);
    return { rows, halo: 0, usesBackground: series.background.kind !== "none" };
  },
  chunk: (input, series, options) => waveChunk(input, series, waveChoice(series, options)),
  finish,
};
