/** Colour arithmetic for the tests of the theme; the app needs none of it. */

type Triple = readonly [number, number, number];

/** Light per channel from `#RRGGBB`: the transfer curve of sRGB (IEC 61966-2-1). */
export function linearRgb(hex: string): Triple {
  const part = (at: number): number => {
    const c = Number.parseInt(hex.slice(at, at + 2), 16) / 255;
    return c <= 0.04045 ? c / 12.92 : ((c + 0.055) / 1.055) ** 2.4;
  };
  return [part(1), part(3), part(5)];
}

const XYZ: readonly Triple[] = [
  [0.4124564, 0.3575761, 0.1804375],
  [0.2126729, 0.7151522, 0.072175],
  [0.0193339, 0.119192, 0.9503041],
];
const WHITE: Triple = [0.95047, 1, 1.08883]; // D65

function times(matrix: readonly Triple[], [x, y, z]: Triple): Triple {
  return matrix.map(([a, b, c]) => a * x + b * y + c * z) as unknown as Triple;
}

/** WCAG 2.2, "contrast ratio": (L₁ + 0.05)/(L₂ + 0.05) of the relative luminances. */
export function contrast(a: string, b: string): number {
  const [l1, l2] = [a, b].map((hex) => {
    const [r, g, blue] = linearRgb(hex);
    return 0.2126 * r + 0.7152 * g + 0.0722 * blue;
  }) as [number, number];
  return (Math.max(l1, l2) + 0.05) / (Math.min(l1, l2) + 0.05);
}

/** CIE 1976 L*a*b* (CIE 15) of light per channel. */
export function lab(rgb: Triple): Triple {
  const f = times(XYZ, rgb).map((value, i) => {
    const t = value / (WHITE[i] as number);
    return t > 216 / 24389 ? Math.cbrt(t) : ((24389 / 27) * t + 16) / 116;
  }) as unknown as Triple;
  return [116 * f[1] - 16, 500 * (f[0] - f[1]), 200 * (f[1] - f[2])];
}

/** Full dichromacy: Machado, Oliveira & Fernandes 2009, IEEE Trans. Vis. Comput. Graph. 15, 1291, severity 1.0. */
export const DICHROMATS: Readonly<Record<"deuteranopia" | "protanopia" | "tritanopia", readonly Triple[]>> = {
  deuteranopia: [
    [0.367322, 0.860646, -0.227968],
    [0.280085, 0.672501, 0.047413],
    [-0.01182, 0.04294, 0.968881],
  ],
  protanopia: [
    [0.152286, 1.052583, -0.204868],
    [0.114503, 0.786281, 0.099216],
    [-0.003882, -0.048116, 1.051998],
  ],
  tritanopia: [
    [1.255528, -0.076749, -0.178779],
    [-0.078411, 0.930809, 0.147602],
    [0.004733, 0.691367, 0.3039],
  ],
};

/** Light per channel as a dichromat sees it. */
export function seenBy(matrix: readonly Triple[], rgb: Triple): Triple {
  return times(matrix, rgb).map((value) => Math.min(1, Math.max(0, value))) as unknown as Triple;
}

const RADIANS = Math.PI / 180;
const SEVENTH = 25 ** 7;

/** CIEDE2000 with unit weights: Sharma, Wu & Dalal 2005, Color Res. Appl. 30, 21, eqs 2–22. */
export function difference(first: Triple, second: Triple): number {
  const mean = (Math.hypot(first[1], first[2]) + Math.hypot(second[1], second[2])) / 2;
  const g = 0.5 * (1 - Math.sqrt(mean ** 7 / (mean ** 7 + SEVENTH)));
  const polar = ([l, a, b]: Triple): Triple => {
    const stretched = a * (1 + g);
    const hue = Math.atan2(b, stretched) / RADIANS;
    return [l, Math.hypot(stretched, b), hue < 0 ? hue + 360 : hue];
  };
  const [l1, c1, h1] = polar(first);
  const [l2, c2, h2] = polar(second);
  const isGrey = c1 * c2 === 0;
  const turn = isGrey ? 0 : ((((h2 - h1 + 180) % 360) + 360) % 360) - 180;
  const dl = l2 - l1;
  const dc = c2 - c1;
  const dh = 2 * Math.sqrt(c1 * c2) * Math.sin((turn / 2) * RADIANS);
  const lm = (l1 + l2) / 2;
  const cm = (c1 + c2) / 2;
  const apart = Math.abs(h1 - h2) > 180;
  const hm = isGrey ? h1 + h2 : apart ? (h1 + h2 + (h1 + h2 < 360 ? 360 : -360)) / 2 : (h1 + h2) / 2;
  const t =
    1 -
    0.17 * Math.cos((hm - 30) * RADIANS) +
    0.24 * Math.cos(2 * hm * RADIANS) +
    0.32 * Math.cos((3 * hm + 6) * RADIANS) -
    0.2 * Math.cos((4 * hm - 63) * RADIANS);
  const sl = 1 + (0.015 * (lm - 50) ** 2) / Math.sqrt(20 + (lm - 50) ** 2);
  const sc = 1 + 0.045 * cm;
  const sh = 1 + 0.015 * cm * t;
  const rotation =
    -2 * Math.sqrt(cm ** 7 / (cm ** 7 + SEVENTH)) * Math.sin(60 * Math.exp(-(((hm - 275) / 25) ** 2)) * RADIANS);
  const [l, c, h] = [dl / sl, dc / sc, dh / sh];
  return Math.sqrt(l * l + c * c + h * h + rotation * c * h);
}
