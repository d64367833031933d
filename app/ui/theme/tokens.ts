/** Every colour of the app, once: the stylesheet's variables and the drawings are both made from here. */

export type ThemeName = "light" | "night";

export interface Tokens {
  readonly desk: string;
  readonly sheet: string;
  readonly inset: string;
  readonly zone: string;
  readonly rule: string;
  readonly rule2: string;
  readonly ink: string;
  readonly ink2: string;
  readonly ink3: string;
  readonly marker: string;
  readonly onMarker: string;
  readonly markerSoft: string;
  readonly swipe: string;
  readonly error: string;
  readonly errorSoft: string;
  readonly coast: string;
  readonly land: string;
  readonly graticule: string;
  readonly contour: string;
  readonly contourBold: string;
  readonly halo: string;
  /** Waves 1 … 8. */
  readonly waves: readonly string[];
  /** Wave 9 and shorter together. */
  readonly shorter: string;
  /** Diverging ramp from zero outward, seven bands a side. */
  readonly below: readonly string[];
  readonly above: readonly string[];
  /** Sequential ramp, from few to many; zero is the sheet. */
  readonly sequential: readonly string[];
}

/** `#RRGGBB` with an opacity. */
export function withOpacity(hex: string, opacity: number): string {
  const part = (at: number): number => Number.parseInt(hex.slice(at, at + 2), 16);
  return `rgba(${part(1)}, ${part(3)}, ${part(5)}, ${opacity})`;
}

const LIGHT_INK = "#15242B";
const NIGHT_INK = "#E8EDE7";

// Waves: long ones cold, short ones warm, each of one hue in both themes. Found by search for the largest smallest difference
// (CIEDE2000) of any pair, as seen normally and by deuteranopes, protanopes and tritanopes, with 3:1 on the sheet or more.
// Ramps: vik (light), berlin (night) and acton (sequential; the night's first stop is our own), F. Crameri, Scientific colour maps, doi:10.5281/zenodo.1243862, MIT licence; ends cut off.
export const THEMES: Readonly<Record<ThemeName, Tokens>> = {
  light: {
    desk: "#DDE3DE",
    sheet: "#F6F8F3",
    inset: "#EAEFE9",
    zone: "#D5DDD7",
    rule: "#C2CBC5",
    rule2: "#71817C",
    ink: LIGHT_INK,
    ink2: "#3F5158",
    ink3: "#55676D",
    marker: "#FFD23F",
    onMarker: LIGHT_INK,
    markerSoft: "#FFF0B8",
    swipe: "#FFD23F",
    error: "#9B1C2B",
    errorSoft: "#F6E1DE",
    coast: withOpacity(LIGHT_INK, 0.62),
    land: withOpacity(LIGHT_INK, 0.055),
    graticule: withOpacity(LIGHT_INK, 0.2),
    contour: withOpacity(LIGHT_INK, 0.72),
    contourBold: withOpacity(LIGHT_INK, 0.92),
    halo: withOpacity("#F6F8F3", 0.85),
    waves: ["#3A48C4", "#4985FF", "#006052", "#00A076", "#8C9300", "#964C00", "#77001F", "#61185E"],
    shorter: "#7C8A87",
    below: ["#BDD7E3", "#9AC1D5", "#76ABC6", "#5295B6", "#317EA7", "#156898", "#05548B"],
    above: ["#E7C6B3", "#DEB095", "#D59A79", "#CC865E", "#C37244", "#BA5E2A", "#A94512"],
    sequential: [
      "#EEE3F4",
      "#E8CDE3",
      "#E2B2CF",
      "#DA96B8",
      "#D07AA0",
      "#B86891",
      "#99658F",
      "#7D638E",
      "#635D88",
      "#504976",
    ],
  },
  night: {
    desk: "#0A1115",
    sheet: "#121C21",
    inset: "#1B272D",
    zone: "#2B3A42",
    rule: "#2C3B41",
    rule2: "#6E8085",
    ink: NIGHT_INK,
    ink2: "#B4C1C0",
    ink3: "#93A3A5",
    marker: "#FFD23F",
    onMarker: LIGHT_INK,
    markerSoft: "#3B3211",
    swipe: "#6B5A17",
    error: "#FF9C94",
    errorSoft: "#3B1E20",
    coast: withOpacity(NIGHT_INK, 0.55),
    land: withOpacity(NIGHT_INK, 0.05),
    graticule: withOpacity(NIGHT_INK, 0.16),
    contour: withOpacity(NIGHT_INK, 0.62),
    contourBold: withOpacity(NIGHT_INK, 0.9),
    halo: withOpacity("#0A1115", 0.8),
    waves: ["#6A80FB", "#CCC6FF", "#04B1AB", "#AFEBBD", "#8A8103", "#FDA65A", "#D85D78", "#865A95"],
    shorter: "#7F8F92",
    below: ["#153544", "#1C475C", "#235B75", "#2B6F8F", "#3483AA", "#4496C5", "#5DA4DC"],
    above: ["#401201", "#521804", "#692510", "#833823", "#9B4E3B", "#B26455", "#CA7A70"],
    sequential: [
      "#2A2140",
      "#3C2B5C",
      "#4D4572",
      "#605B87",
      "#7C638D",
      "#99658F",
      "#BA6992",
      "#D27DA3",
      "#DB9BBC",
      "#EAD4E9",
    ],
  },
};

/** Colour of a wave in every figure: k 0 is ink, k 9 and beyond share one. */
export function waveColour(k: number, theme: ThemeName): string {
  const tokens = THEMES[theme];
  if (k === 0) return tokens.ink;
  return tokens.waves[k - 1] ?? tokens.shorter;
}

/** Colour of a departure on the stepped, diverging ramp; the sheet itself under one step, the last band open; null where missing. */
export function rampColour(value: number, step: number, theme: ThemeName): string | null {
  if (Number.isNaN(value)) return null;
  const tokens = THEMES[theme];
  const band = Math.min(7, Math.floor(Math.abs(value) / step));
  if (band === 0) return tokens.sheet;
  return (value < 0 ? tokens.below : tokens.above)[band - 1] as string;
}

/** The stylesheet's variables of a theme: `--desk`, `--sheet`, … `--wave-1` … */
export function cssVariables(theme: ThemeName): Record<string, string> {
  const tokens = THEMES[theme];
  const plain = Object.entries(tokens).flatMap(([name, value]) =>
    typeof value === "string" ? [[`--${name}`, value]] : [],
  );
  const waves = tokens.waves.map((colour, i) => [`--wave-${i + 1}`, colour]);
  return Object.fromEntries([...plain, ...waves]);
}

export const FONT = '"Sofia Sans Variable", "Sofia Sans", sans-serif';
