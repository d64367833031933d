import { reasonCode } from "../field/reasons.ts";
import type { ChunkPart, Coordinate, Diagnostic, OptionValues, Outcome, ResultVariable, Series } from "./entry.ts";
import { SINGLE_NOTE } from "./precision.ts";
import { interferenceVariables } from "./waves/interference.ts";
import { WAVE_OPTIONS } from "./waves/option-specs.ts";
import { WAVE_OUTPUTS } from "./waves/output-specs.ts";
import { reconstructionVariable } from "./waves/reconstruction.ts";
import { joinedParts, pieces } from "./waves/series-join.ts";
import { amplitudeVariables, incoherentVariables } from "./waves/wave-amplitudes.ts";
import { planRows, waveChunk } from "./waves/wave-chunk.ts";
import { shareVariable } from "./waves/wave-extras.ts";
import { WaveFrame } from "./waves/wave-frame.ts";
import { waveChoice } from "./waves/wave-options.ts";
import { driftVariables, LEAST_SHARE, speedVariables } from "./waves/wave-speeds.ts";

const FORMULA =
  "<mrow><msub><mi>c</mi><mi>k</mi></msub><mo>=</mo><mfrac><mn>1</mn><mi>N</mi></mfrac><munder><mo>∑</mo><mi>n</mi></munder>" +
  "<mi>x</mi><mo>(</mo><msub><mi>λ</mi><mi>n</mi></msub><mo>)</mo><msup><mi>e</mi><mrow><mo>−</mo><mi>i</mi><mi>k</mi><msub><mi>λ</mi><mi>n</mi></msub></mrow></msup>" +
  "<mo>,</mo><mspace width='1em'/><msub><mi>A</mi><mi>k</mi></msub><mo>=</mo><mn>2</mn><mo>|</mo><msub><mi>c</mi><mi>k</mi></msub><mo>|</mo>" +
  "<mo>,</mo><mspace width='1em'/><msub><mi>λ</mi><mi>k</mi></msub><mo>=</mo><mo>−</mo><mfrac><mrow><mi>arg</mi><msub><mi>c</mi><mi>k</mi></msub></mrow><mi>k</mi></mfrac></mrow>";

const MISSING = reasonCode("missing");

function finish(parts: readonly ChunkPart[], series: Series, options: OptionValues): Outcome {
  const choice = waveChoice(series, options);
  const frame = new WaveFrame(series, choice);
  const notes: string[] = [];
  const coordinates: Coordinate[] = frame.coordinates();
  const incoherent = choice.band !== null && !choice.coherent;
  const variables: ResultVariable[] = [];
  if (incoherent) {
    variables.push(...incoherentVariables(frame, joinedParts(parts, "c"), joinedParts(parts, "variance")));
    notes.push(
      "The band is an incoherent mean: rows are averaged after their amplitudes are taken, so there is no ridge, phase or speed.",
    );
  } else {
    const record = { paths: pieces(parts, "paths"), angles: pieces(parts, "angles") };
    variables.push(...amplitudeVariables(frame, parts), ...speedVariables(frame, record, notes));
    if (choice.driftDays > 0) variables.push(...driftVariables(frame, record, joinedParts(parts, "variance")));
    const background = parts[0]?.background === undefined ? null : joinedParts(parts, "background");
    if (background !== null)
      variables.push(
        ...interferenceVariables(frame, joinedParts(parts, choice.ofAnomaly ? "c" : "anomaly"), background),
      );
    if (choice.reconstruct !== null) {
      const made = reconstructionVariable(frame, joinedParts(parts, "c"));
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
    notes.push(SINGLE_NOTE);
  if (variables[0]?.reasons?.includes(MISSING) ?? false)
    notes.push("Rows that miss a value have no waves; they are marked missing.");
  const usesBackground = choice.ofAnomaly || variables.some(({ name }) => name === "interference");
  if (usesBackground && frame.edgeSteps > 0)
    notes.push(
      `${frame.edgeSteps} steps lie nearer to the record's ends than half the running mean's window: they have no background, nor what departs from it.`,
    );
  const asked = (options.waves as readonly [number, number])[1];
  if (asked > choice.waves[1])
    notes.push(
      `Waves end at ${choice.waves[1]}, the shortest that ${frame.nLon} columns carry; ${asked} was asked for.`,
    );
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
    "A wave of no amplitude has no ridge, and two steps have a speed without an error. " +
    `A drift is left out for a wave with under ${100 * LEAST_SHARE} % of the variance along the circle. The wave whose crests lie two columns apart has no speed.`,
  sources: [
    "Fourier series along a latitude circle: common practice",
    "Draper & Smith 1998, Applied Regression Analysis, chapter 9: weighted least squares and its standard error",
    "Smith & Kushner 2012, Journal of Geophysical Research: linear interference",
  ],
  inputs: [{ name: "field", quantities: "any", about: "the field that is taken apart" }],
  options: WAVE_OPTIONS,
  outputs: WAVE_OUTPUTS,
  plan(series, options) {
    const choice = waveChoice(series, options);
    // An incoherent mean has no phases, so nothing of it can interfere.
    const comparable = choice.band === null || choice.coherent || choice.ofAnomaly;
    return { rows: planRows(choice), halo: 0, usesBackground: series.background.kind !== "none" && comparable };
  },
  chunk: (input, series, options) => waveChunk(input, series, waveChoice(series, options)),
  finish,
};
