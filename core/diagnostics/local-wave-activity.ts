import { activityChunk, activityReasons } from "./activity/activity-chunk.ts";
import { activityCoordinates, activityFrame, planRows } from "./activity/activity-frame.ts";
import { HEMISPHERE_OPTION } from "./blocks/option-specs.ts";
import type { ChunkPart, Diagnostic, OptionValues, Outcome, ResultVariable, Series } from "./entry.ts";
import { isSingle, resultArray, SINGLE_NOTE } from "./precision.ts";

const FORMULA =
  "<mrow><mi>A</mi><mo>=</mo><mfrac><mi>a</mi><mrow><mi>cos</mi><msub><mi>φ</mi><mi>e</mi></msub></mrow></mfrac><mo>[</mo>" +
  "<munder><mo>∫</mo><mrow><mi>φ</mi><mo>&gt;</mo><msub><mi>φ</mi><mi>e</mi></msub><mo>,</mo><mover><mi>z</mi><mo>^</mo></mover><mo>&gt;</mo><mn>0</mn></mrow></munder>" +
  "<mover><mi>z</mi><mo>^</mo></mover><mi>cos</mi><mi>φ</mi><mi>d</mi><mi>φ</mi><mo>+</mo>" +
  "<munder><mo>∫</mo><mrow><mi>φ</mi><mo>&lt;</mo><msub><mi>φ</mi><mi>e</mi></msub><mo>,</mo><mover><mi>z</mi><mo>^</mo></mover><mo>&lt;</mo><mn>0</mn></mrow></munder>" +
  "<mo>(</mo><mo>−</mo><mover><mi>z</mi><mo>^</mo></mover><mo>)</mo><mi>cos</mi><mi>φ</mi><mi>d</mi><mi>φ</mi><mo>]</mo><mo>,</mo><mspace width='1em'/>" +
  "<mover><mi>z</mi><mo>^</mo></mover><mo>=</mo><mi>Z</mi><mo>−</mo><msub><mi>Z</mi><mi>e</mi></msub><mo>(</mo><msub><mi>φ</mi><mi>e</mi></msub><mo>)</mo></mrow>";

function finish(parts: readonly ChunkPart[], series: Series, options: OptionValues): Outcome {
  const frame = activityFrame(series, options);
  const { rows, nLevel, nLon, nTime } = frame;
  const size = nTime * nLevel * rows.length * nLon;
  const reasons = activityReasons(parts, frame);
  const hasLevel = series.levels !== null;
  const variable = (name: string, title: string, data: ResultVariable["data"]): ResultVariable => ({
    name,
    title,
    units: "m2",
    dims: ["time", ...(hasLevel ? ["level"] : []), "latitude", "longitude"],
    shape: [nTime, ...(hasLevel ? [nLevel] : []), rows.length, nLon],
    data,
    ...(reasons === null ? {} : { reasons }),
  });
  const joined = (name: string): ResultVariable["data"] => {
    const data = resultArray(size);
    let at = 0;
    for (const part of parts) {
      data.set(part[name], at);
      at += part[name].length;
    }
    return data;
  };
  const variables = [variable("activity", "Local wave activity", joined("activity"))];
  if (options.parts === true)
    variables.push(
      variable("anticyclonic_activity", "Anticyclonic local wave activity", joined("anticyclonic")),
      variable("cyclonic_activity", "Cyclonic local wave activity", joined("cyclonic")),
    );
  const notes: string[] = [];
  if (isSingle(size)) notes.push(SINGLE_NOTE);
  const isShort = parts.some(({ missing }) => missing.includes(1));
  if (isShort)
    notes.push(
      "Where a hemisphere misses a height its cells cannot be put in order: it has no local wave activity at that step.",
    );
  return { coordinates: activityCoordinates(series, frame), variables, notes };
}

export const localWaveActivity: Diagnostic = {
  id: "local-wave-activity",
  title: "Local wave activity",
  summary:
    "How far, and over what area, heights are displaced from the latitude where they would lie without waves, at each longitude.",
  formula: FORMULA,
  validity:
    "A full circle of longitudes and every row from the equator to the pole; each hemisphere by itself. A hemisphere that misses a height has none at that step. " +
    "Never negative; zero where heights are zonally symmetric and fall poleward. The row of the equivalent latitude counts half on either side; there is none at the equator's row nor at the pole.",
  sources: [
    "Chen, Lu, Burrows & Leung 2015, Geophysical Research Letters 42, 10952: local finite-amplitude wave activity of height",
  ],
  inputs: [{ name: "field", quantities: ["geopotential_height"], about: "heights of a hemisphere" }],
  options: [
    HEMISPHERE_OPTION,
    {
      name: "latitudes",
      kind: "range",
      title: "Equivalent latitudes",
      units: "degrees",
      default: null,
      min: 0,
      max: 90,
      about:
        "Rows that are written, counted poleward; none for all. Heights are always put in order over the whole hemisphere.",
    },
    {
      name: "parts",
      kind: "boolean",
      title: "Both parts",
      default: true,
      about: "Whether the anticyclonic and the cyclonic part are written beside their sum.",
    },
  ],
  outputs: [
    {
      name: "activity",
      title: "Local wave activity",
      units: "m2",
      dims: ["time", "level", "latitude", "longitude"],
      about: "The sum of both parts.",
    },
    {
      name: "anticyclonic_activity",
      title: "Anticyclonic part",
      units: "m2",
      dims: ["time", "level", "latitude", "longitude"],
      about: "Of air poleward of its equivalent latitude: ridges.",
      when: "parts is on",
    },
    {
      name: "cyclonic_activity",
      title: "Cyclonic part",
      units: "m2",
      dims: ["time", "level", "latitude", "longitude"],
      about: "Of air equatorward of its equivalent latitude: troughs.",
      when: "parts is on",
    },
  ],
  plan(series, options) {
    return { rows: planRows(activityFrame(series, options)), halo: 0, usesBackground: false };
  },
  chunk: (input, series, options) => activityChunk(input, activityFrame(series, options), options.parts === true),
  finish,
};
