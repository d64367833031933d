import { bandText } from "../text/place-text.ts";
import { FONT, type ThemeName, type Tokens, waveColour } from "../theme/tokens.ts";
import { type ChartLayout, RIM_BASE, RIM_REACH } from "./chart-layout.ts";
import type { Rectangle } from "./chart-map.ts";
import { levelText } from "./line-labels.ts";
import type { Pen } from "./pen.ts";
import type { ChartRim } from "./types.ts";

/** Values beyond the ramp's last band swing this much further, no more: one great day must not flatten all others. */
const MOST_SWING = 1.15;
/** Middle of the ramp's last band, steps. */
const LAST_BAND = 7.5;
/** px between the strip's edge and the curve at that value. */
const STRIP_INSET = 7;
/** The ramp's bands whose colours fill the curve. */
const FILL_BAND = 2;

type Place = (lon: number, value: number) => readonly [x: number, y: number];

/** Value that swings the curve by its full reach: the ramp's last band, and so the same through the record. */
export function rimScale(rim: ChartRim, step: number | null): number {
  if (step !== null) return LAST_BAND * step;
  let most = 0;
  for (const value of rim.values) if (Math.abs(value) > most) most = Math.abs(value);
  return most || 1;
}

/** What the strip shows, its edge, and the values at its quarters. */
function drawStripFrame(
  pen: Pen,
  strip: Rectangle,
  band: readonly [number, number],
  step: number | null,
  units: string,
  tokens: Tokens,
): void {
  const { x, y, width, height } = strip;
  pen.fillStyle = tokens.ink2;
  pen.textAlign = "left";
  pen.textBaseline = "alphabetic";
  pen.font = `400 12px ${FONT}`;
  pen.fillText(`Along ${bandText(band)}${units === "" ? "" : `, ${units}`}`, x, y - 6);
  pen.strokeStyle = tokens.rule;
  pen.lineWidth = 0.8;
  const middle = y + height / 2;
  if (step !== null) {
    pen.font = `400 11.5px ${FONT}`;
    pen.textAlign = "right";
    pen.textBaseline = "middle";
    for (const sign of [1, -1]) {
      const v = middle - (sign * (height / 2 - STRIP_INSET) * 4) / LAST_BAND;
      pen.beginPath();
      pen.moveTo(x, v);
      pen.lineTo(x + width, v);
      pen.stroke();
      pen.fillText(`${sign > 0 ? "+" : "−"}${levelText(4 * step)}`, x - 6, v);
    }
  }
  pen.strokeStyle = tokens.rule2;
  for (const v of [y, y + height]) {
    pen.beginPath();
    pen.moveTo(x, v);
    pen.lineTo(x + width, v);
    pen.stroke();
  }
}

/**
 * The departure along the band: round the rim of the disc, or in the strip under the belt; filled by sign, with the leading
 * wave in its colour and a triangle at each of its ridges.
 *
 * @param lon Degrees east of the values, evenly spaced; a region's do not go round, and nothing is drawn beyond them.
 */
export function drawRim(
  pen: Pen,
  layout: ChartLayout,
  rim: ChartRim,
  lon: Float64Array,
  band: readonly [number, number],
  step: number | null,
  units: string,
  theme: ThemeName,
  tokens: Tokens,
): void {
  const { map, strip } = layout;
  const scale = rimScale(rim, step);
  const swing = (value: number): number => Math.max(-MOST_SWING, Math.min(MOST_SWING, value / scale));
  const base = map.radius + RIM_BASE;
  const at: Place =
    strip === null
      ? (degrees, share) => {
          const angle = ((degrees - map.firstLon) * Math.PI) / 180;
          const r = base + RIM_REACH * share;
          return [map.cx + map.north * r * Math.sin(angle), map.cy + r * Math.cos(angle)];
        }
      : (degrees, share) => [
          strip.x + ((degrees - map.firstLon) / 360) * strip.width,
          strip.y + strip.height / 2 - share * (strip.height / 2 - STRIP_INSET),
        ];
  pen.save();
  if (strip !== null) {
    drawStripFrame(pen, strip, band, step, units, tokens);
    pen.beginPath();
    pen.rect(strip.x, strip.y, strip.width, strip.height);
    pen.clip();
  }
  // Once round from the map's first longitude, in steps of a column.
  const n = lon.length;
  const own = n > 1 ? ((lon[n - 1] as number) - (lon[0] as number)) / (n - 1) : 360;
  const closes = Math.abs(own * n - 360) < own / 4;
  const columnWidth = closes ? 360 / n : own;
  const value = (degrees: number): number => {
    const x = ((((degrees - (lon[0] as number)) % 360) + 360) % 360) / columnWidth;
    // A region has no curve beyond its ends.
    if (!closes && x > n - 1) return Number.NaN;
    const west = Math.floor(x) % n;
    const share = x - Math.floor(x);
    return (rim.values[west] as number) * (1 - share) + (rim.values[(west + 1) % n] as number) * share;
  };
  const places = Array.from(
    { length: Math.round(360 / columnWidth) + 1 },
    (_, i) => map.firstLon + Math.min(360, i * columnWidth),
  );
  for (const sign of [1, -1]) {
    pen.beginPath();
    places.forEach((degrees, i) => {
      const here = value(degrees);
      const share = Number.isNaN(here) ? 0 : swing(sign > 0 ? Math.max(0, here) : Math.min(0, here));
      if (i === 0) pen.moveTo(...at(degrees, share));
      else pen.lineTo(...at(degrees, share));
    });
    for (const degrees of [...places].reverse()) pen.lineTo(...at(degrees, 0));
    pen.closePath();
    pen.fillStyle = (sign > 0 ? tokens.above : tokens.below)[FILL_BAND] as string;
    pen.fill();
  }
  pen.beginPath();
  for (let i = 0; i <= 360; i += 2) {
    if (i === 0) pen.moveTo(...at(map.firstLon, 0));
    else pen.lineTo(...at(map.firstLon + i, 0));
  }
  pen.strokeStyle = tokens.ink;
  pen.lineWidth = 0.8;
  pen.stroke();
  if (rim.wave !== null) drawWave(pen, rim.wave, map.firstLon, at, swing, scale, strip === null, theme);
  pen.restore();
}

function drawWave(
  pen: Pen,
  { k, amplitude, ridge }: NonNullable<ChartRim["wave"]>,
  firstLon: number,
  at: Place,
  swing: (value: number) => number,
  scale: number,
  isDisc: boolean,
  theme: ThemeName,
): void {
  pen.beginPath();
  for (let i = 0; i <= 360; i++) {
    const degrees = firstLon + i;
    const share = swing(amplitude * Math.cos((k * (degrees - ridge) * Math.PI) / 180));
    if (i === 0) pen.moveTo(...at(degrees, share));
    else pen.lineTo(...at(degrees, share));
  }
  pen.strokeStyle = waveColour(k, theme);
  pen.lineWidth = 2.2;
  pen.lineJoin = "round";
  pen.stroke();
  pen.fillStyle = waveColour(k, theme);
  const top = swing(Math.min(amplitude, scale));
  for (let i = 0; i < k; i++) {
    const degrees = firstLon + ((((ridge + (360 * i) / k - firstLon) % 360) + 360) % 360);
    // The tip points at the ridge from without the disc, from above in the strip.
    const [x, y] = at(degrees, top);
    const [x1, y1] = at(degrees, top + 1);
    const length = Math.hypot(x1 - x, y1 - y) || 1;
    const [ux, uy] = [(x1 - x) / length, (y1 - y) / length];
    const foot = isDisc ? 3 : 2.5;
    pen.beginPath();
    pen.moveTo(x + foot * ux, y + foot * uy);
    pen.lineTo(x + (foot + 7) * ux - 4.2 * uy, y + (foot + 7) * uy + 4.2 * ux);
    pen.lineTo(x + (foot + 7) * ux + 4.2 * uy, y + (foot + 7) * uy - 4.2 * ux);
    pen.closePath();
    pen.fill();
  }
}
