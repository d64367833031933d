import type { ChartGrid } from "./types.ts";

export interface Extremum {
  readonly lat: number;
  readonly lon: number;
  readonly value: number;
}

/** Degrees of arc within which an extremum must be the largest. */
const REACH = 14;
const RADIANS = Math.PI / 180;

/** Local extremes of a departure, largest first: at least `least` in size and alone within about 1500 km. */
export function extrema(
  grid: ChartGrid,
  values: Float32Array,
  least: number,
  hemisphere: 1 | -1,
  most: number,
): Extremum[] {
  const { lat, lon } = grid;
  const found: Extremum[] = [];
  const candidates: Extremum[] = [];
  for (let r = 0; r < lat.length; r++) {
    if (hemisphere * (lat[r] as number) < 24 || Math.abs(lat[r] as number) > 88) continue;
    for (let c = 0; c < lon.length; c++) {
      const value = values[r * lon.length + c] as number;
      if (!(Math.abs(value) >= least)) continue;
      let isPeak = true;
      for (let dr = -1; dr <= 1 && isPeak; dr++)
        for (let dc = -1; dc <= 1 && isPeak; dc++) {
          const row = r + dr;
          if ((dr === 0 && dc === 0) || row < 0 || row >= lat.length) continue;
          const other = values[row * lon.length + ((c + dc + lon.length) % lon.length)] as number;
          if (value > 0 ? other > value : other < value) isPeak = false;
        }
      if (isPeak) candidates.push({ lat: lat[r] as number, lon: lon[c] as number, value });
    }
  }
  candidates.sort((a, b) => Math.abs(b.value) - Math.abs(a.value));
  for (const one of candidates) {
    if (found.length >= most) break;
    if (found.every((other) => arc(one, other) > REACH)) found.push(one);
  }
  return found;
}

function arc(a: Extremum, b: Extremum): number {
  const cos =
    Math.sin(a.lat * RADIANS) * Math.sin(b.lat * RADIANS) +
    Math.cos(a.lat * RADIANS) * Math.cos(b.lat * RADIANS) * Math.cos((a.lon - b.lon) * RADIANS);
  return Math.acos(Math.min(1, Math.max(-1, cos))) / RADIANS;
}
