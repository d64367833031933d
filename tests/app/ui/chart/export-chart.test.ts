import { describe, expect, test } from "vitest";
import { chartSvg, noteLines } from "../../../../app/ui/chart/export-chart.ts";
import type { ChartView } from "../../../../app/ui/chart/types.ts";
import { THEMES } from "../../../../app/ui/theme/tokens.ts";
import { globalGrid, gridValues, textWidth, waveLayers } from "./fields.ts";

const GRID = globalGrid(2.5);
const NORTH: ChartView = { kind: "hemisphere", hemisphere: "north", turn: 0, cut: -180 };
const BELT: ChartView = { ...NORTH, kind: "belt" };
const NOTES = ["k 3 leads at 55°N: 320 gpm", 'a & b <c> "d".nc', "Guidance, not a warning."];

/** Everything in a text that XML 1.0 forbids: tags that do not pair, bad attributes, bare & and <. */
function faults(xml: string): string[] {
  const found: string[] = [];
  const open: string[] = [];
  let rest = xml;
  for (;;) {
    const at = rest.indexOf("<");
    const text = at < 0 ? rest : rest.slice(0, at);
    if (/&(?!(amp|lt|gt|quot);)/.test(text) || text.includes(">"))
      found.push(`bare character in "${text.slice(0, 40)}"`);
    if (at < 0) break;
    const tag = /^<(\/?)([A-Za-z]+)((?:\s+[A-Za-z][A-Za-z:-]*="[^"<]*")*)\s*(\/?)>/.exec(rest.slice(at));
    if (tag === null) return [...found, `no tag at "${rest.slice(at, at + 60)}"`];
    const [whole, close, name = "", attributes = "", self] = tag;
    if (/&(?!(amp|lt|gt|quot);)/.test(attributes)) found.push(`bare & in ${whole.slice(0, 60)}`);
    const names = [...attributes.matchAll(/([A-Za-z:-]+)="/g)].map(([, attribute]) => attribute);
    if (new Set(names).size !== names.length) found.push(`an attribute twice in ${whole.slice(0, 80)}`);
    if (close === "/") {
      if (open.pop() !== name) found.push(`</${name}> closes nothing`);
    } else if (self === "") open.push(name);
    rest = rest.slice(at + whole.length);
  }
  return open.length === 0 ? found : [...found, `left open: ${open.join(", ")}`];
}

function svg(view: ChartView, theme: "light" | "night" = "light", changes = {}): string {
  return chartSvg(view, waveLayers(GRID, changes), theme, 560, 540, NOTES, textWidth);
}

describe.each([
  ["hemisphere", NORTH],
  ["south", { ...NORTH, hemisphere: "south" } as ChartView],
  ["belt", BELT],
])("SVG, %s", (_, view) => {
  test.each(["light", "night"] as const)("%s: well formed, no number missing, every clip defined", (theme) => {
    const text = svg(view, theme);
    expect(faults(text)).toEqual([]);
    expect(/NaN|undefined|Infinity|rgba/.exec(text)?.[0]).toBeUndefined();
    const defined = [...text.matchAll(/<clipPath id="(\w+)"/g)].map(([, id]) => id);
    expect(new Set(defined).size).toBe(defined.length);
    for (const [, id] of text.matchAll(/url\(#(\w+)\)/g)) expect(defined).toContain(id);
  });

  test("nothing by the pixel: the bands are areas in the ramp's colours", () => {
    const text = svg(view);
    expect(text.includes("<image")).toBe(false);
    for (const colour of [...THEMES.light.above.slice(0, 4), ...THEMES.light.below.slice(0, 4)])
      expect(new RegExp(`<path d="M[^"]+" fill="${colour}" fill-rule="evenodd"`).test(text)).toBe(true);
  });

  test("caption, readout, keys and notes are in it as text", () => {
    const text = svg(view);
    for (const words of [
      "Height and anomaly",
      "55°N 17.5°W",
      "each 60 gpm",
      "each 240",
      "k 3 at 55°N",
      "±60",
      "+420",
      "a &amp; b &lt;c&gt; &quot;d&quot;.nc",
      "Guidance, not a warning.",
    ])
      expect(text.includes(words), words).toBe(true);
    expect(text.includes("<title>Height and anomaly, 500 hPa, 9 Feb 2001, 00 UTC</title>")).toBe(true);
  });

  test("no text on the chart is under 10.5 px", () => {
    for (const [, size] of svg(view).matchAll(/font:\d+ ([\d.]+)px/g))
      expect(Number(size)).toBeGreaterThanOrEqual(10.5);
  });
});

test("extremes carry their signed value, to the last digit of the field", () => {
  const text = svg(NORTH);
  const layers = waveLayers(GRID);
  let most = 0;
  layers.shading?.values.forEach((value, i) => {
    if ((GRID.lat[Math.floor(i / GRID.lon.length)] as number) > 24) most = Math.max(most, value);
  });
  expect(text.includes(`>+${Math.round(most)}</text>`)).toBe(true);
  expect(/>−\d{3}<\/text>/.test(text)).toBe(true);
});

test("missing values are dotted, with the reason on the spot; without any there is no reason", () => {
  const values = gridValues(GRID, (lat, lon) => (Math.abs(lat - 45) < 14 && Math.abs(lon - 90) < 30 ? Number.NaN : 80));
  const text = svg(NORTH, "light", { shading: { values, step: 60, units: "gpm" } });
  expect(text.includes(">no value in the file</text>")).toBe(true);
  expect(text.includes('stroke-dasharray="4 3"')).toBe(true);
  expect(svg(NORTH).includes("no value in the file")).toBe(false);
});

test("each layer can be left out", () => {
  expect(faults(svg(NORTH, "light", { contours: null, shading: null, rim: null }))).toEqual([]);
  expect(faults(svg(BELT, "light", { contours: null, shading: null, rim: null }))).toEqual([]);
});

test("a cursor off the map draws no ring and no NaN", () => {
  const text = svg(NORTH, "light", { cursor: { lat: -40, lon: 10 } });
  expect(text.includes("NaN")).toBe(false);
  expect(text.length).toBeLessThan(svg(NORTH).length);
});

test("notes are broken at words to the sheet's width, and empty ones left out", () => {
  const lines = noteLines(["one two three four", "", "five"], 70, textWidth);
  // 0.53 · 12 px a letter: eleven letters fit 70 px.
  expect(lines).toEqual(["one two", "three four", "five"]);
  expect(noteLines(["unbreakablyLongWord"], 20, textWidth)).toEqual(["unbreakablyLongWord"]);
});
