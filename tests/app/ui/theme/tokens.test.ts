import { describe, expect, test } from "vitest";
import { cssVariables, rampColour, THEMES, type ThemeName, waveColour } from "../../../../app/ui/theme/tokens.ts";
import { contrast, DICHROMATS, difference, lab, linearRgb, seenBy } from "./colour.ts";

const NAMES = ["light", "night"] as const satisfies readonly ThemeName[];

describe("the tests' own colour arithmetic", () => {
  // Sharma, Wu & Dalal 2005, Color Res. Appl. 30, 21, table 1, printed to four places.
  test.each([
    [[50, 2.6772, -79.7751], [50, 0, -82.7485], 2.0425],
    [[50, 2.8361, -74.02], [50, 0, -82.7485], 3.4412],
    [[50, -1.3802, -84.2814], [50, 0, -82.7485], 1.0],
    [[50, 0, 0], [50, -1, 2], 2.3669],
    [[50, 2.49, -0.001], [50, -2.49, 0.0009], 7.1792],
    [[50, 2.5, 0], [73, 25, -18], 27.1492],
    [[50, 2.5, 0], [61, -5, 29], 22.8977],
    [[22.7233, 20.0904, -46.694], [23.0331, 14.973, -42.5619], 2.0373],
    [[2.0776, 0.0795, -1.135], [0.9033, -0.0636, -0.5514], 0.9082],
  ] as const)("CIEDE2000 of %j and %j is %d", (a, b, expected) => {
    expect(Math.abs(difference(a, b) - expected)).toBeLessThanOrEqual(0.5e-4 + 1e-9);
  });

  test("black on white has a contrast of 21 (WCAG 2.2)", () => {
    expect(contrast("#000000", "#FFFFFF")).toBeCloseTo(21, 10);
  });
});

describe.each(NAMES)("contrast, %s", (name) => {
  const tokens = THEMES[name];

  // WCAG 2.2: 4.5:1 for text (1.4.3), 3:1 for edges of controls and parts of figures (1.4.11).
  test.each(["ink", "ink2", "ink3", "error"] as const)("%s is readable on every ground", (text) => {
    for (const ground of ["desk", "sheet", "inset", "markerSoft", "errorSoft"] as const)
      expect(contrast(tokens[text], tokens[ground]), `${text} on ${ground}`).toBeGreaterThanOrEqual(4.5);
  });

  test("edges of controls are seen on every ground", () => {
    for (const ground of ["desk", "sheet", "inset", "markerSoft"] as const)
      expect(contrast(tokens.rule2, tokens[ground]), ground).toBeGreaterThanOrEqual(3);
  });

  test("text on the marker and on the highlighter's stroke is readable", () => {
    expect(contrast(tokens.onMarker, tokens.marker)).toBeGreaterThanOrEqual(4.5);
    expect(contrast(tokens.ink, tokens.swipe)).toBeGreaterThanOrEqual(4.5);
  });

  test("every wave and the shorter ones are seen on the sheet", () => {
    for (const [i, colour] of [...tokens.waves, tokens.shorter].entries())
      expect(contrast(colour, tokens.sheet), `k ${i + 1}`).toBeGreaterThanOrEqual(3);
  });
});

describe.each(NAMES)("wave colours, %s", (name) => {
  const { waves, shorter, marker, ink } = THEMES[name];

  /** The smallest difference of any two of the colours as they are seen, and which. */
  function closest(colours: readonly string[], see: (hex: string) => ReturnType<typeof linearRgb>) {
    let least = { by: Number.POSITIVE_INFINITY, pair: "" };
    for (let i = 0; i < colours.length; i++)
      for (let j = 0; j < i; j++) {
        const by = difference(lab(see(colours[i] as string)), lab(see(colours[j] as string)));
        if (by < least.by) least = { by, pair: `${j + 1}, ${i + 1}` };
      }
    return least;
  }

  // The targets are the design's own: what its light set reaches, rounded down.
  test.each([
    ["normally", null, 21],
    ["with deuteranopia", DICHROMATS.deuteranopia, 15],
    ["with protanopia", DICHROMATS.protanopia, 15],
    ["with tritanopia", DICHROMATS.tritanopia, 12],
  ] as const)("eight waves are told apart %s", (_, matrix, target) => {
    const least = closest(waves, (hex) => (matrix === null ? linearRgb(hex) : seenBy(matrix, linearRgb(hex))));
    expect(least.by, `waves ${least.pair}`).toBeGreaterThanOrEqual(target);
  });

  test("no wave is taken for the marker, for ink or for the shorter waves together", () => {
    for (const [i, colour] of waves.entries())
      for (const other of [marker, ink, shorter])
        expect(
          difference(lab(linearRgb(colour)), lab(linearRgb(other))),
          `k ${i + 1}, ${other}`,
        ).toBeGreaterThanOrEqual(12);
  });

  test("a wave keeps its hue from theme to theme", () => {
    const hue = (hex: string): number => {
      const [, a, b] = lab(linearRgb(hex));
      return (Math.atan2(b, a) * 180) / Math.PI;
    };
    for (const [i, colour] of waves.entries()) {
      const turn = hue(colour) - hue(THEMES.light.waves[i] as string);
      // 20°: neighbouring hue names begin some 30° apart in L*a*b* (common practice).
      expect(Math.abs(((((turn + 180) % 360) + 360) % 360) - 180), `k ${i + 1}`).toBeLessThanOrEqual(20);
    }
  });

  test("k 0 is ink; k 9 and beyond share a colour", () => {
    expect(waveColour(0, name)).toBe(ink);
    expect(waveColour(8, name)).toBe(waves[7]);
    expect(waveColour(9, name)).toBe(shorter);
    expect(waveColour(42, name)).toBe(shorter);
  });
});

describe.each(NAMES)("ramps, %s", (name) => {
  const tokens = THEMES[name];

  test("the band is chosen by whole steps; the sheet is everything under one, the last band is open", () => {
    const { sheet, above, below } = tokens;
    expect(rampColour(0, 60, name)).toBe(sheet);
    expect(rampColour(59.9, 60, name)).toBe(sheet);
    expect(rampColour(-59.9, 60, name)).toBe(sheet);
    expect(rampColour(60, 60, name)).toBe(above[0]);
    expect(rampColour(-60, 60, name)).toBe(below[0]);
    expect(rampColour(419.9, 60, name)).toBe(above[5]);
    expect(rampColour(420, 60, name)).toBe(above[6]);
    expect(rampColour(-9999, 60, name)).toBe(below[6]);
    expect(rampColour(Number.NaN, 60, name)).toBeNull();
  });

  test.each(["above", "below", "sequential"] as const)("lightness of %s goes one way, away from the sheet", (ramp) => {
    const lightness = tokens[ramp].map((hex) => lab(linearRgb(hex))[0]);
    const away = name === "light" ? -1 : 1;
    for (let i = 1; i < lightness.length; i++)
      // 3 of 100: several times what is just seen (about 1, common practice).
      expect(away * ((lightness[i] as number) - (lightness[i - 1] as number)), `stop ${i}`).toBeGreaterThanOrEqual(3);
  });

  test("below and above are told apart band by band, by dichromats too", () => {
    for (const [who, matrix] of Object.entries(DICHROMATS))
      for (let i = 0; i < 7; i++) {
        const [a, b] = [tokens.below[i], tokens.above[i]].map((hex) => lab(seenBy(matrix, linearRgb(hex as string))));
        expect(difference(a as never, b as never), `${who}, band ${i + 1}`).toBeGreaterThanOrEqual(17);
      }
  });
});

test("the stylesheet's variables hold every plain colour and the waves", () => {
  const variables = cssVariables("night");
  expect(variables["--sheet"]).toBe(THEMES.night.sheet);
  expect(variables["--markerSoft"]).toBe(THEMES.night.markerSoft);
  expect(variables["--wave-8"]).toBe(THEMES.night.waves[7]);
});
