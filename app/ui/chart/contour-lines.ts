import type { FineField } from "./fine-grid.ts";

/** One line of equal value, as longitudes and latitudes in turn; a closed one ends where it began. */
export interface ContourLine {
  readonly level: number;
  readonly points: Float64Array;
  readonly isClosed: boolean;
}

/**
 * Lines of equal value by marching squares, joined end to end.
 *
 * Cells at the date line are neighbours where the grid closes the circle; longitudes then run on past 360°. A saddle is
 * resolved by the mean of its corners. Cells with a missing corner have no line.
 *
 * @param interval Lines at every multiple of it.
 */
export function contourLines(field: FineField, interval: number): ContourLine[] {
  const { values, nLat, nLon, closesCircle } = field;
  const columns = closesCircle ? nLon : nLon - 1;
  const cuts = new Map<number, number[]>();
  for (let r = 0; r + 1 < nLat; r++) {
    for (let c = 0; c < columns; c++) {
      const east = c + 1 === nLon ? 0 : c + 1;
      const sw = values[r * nLon + c] as number;
      const se = values[r * nLon + east] as number;
      const nw = values[(r + 1) * nLon + c] as number;
      const ne = values[(r + 1) * nLon + east] as number;
      const low = Math.min(sw, se, nw, ne);
      const high = Math.max(sw, se, nw, ne);
      // Math.min of a missing value is missing, and the loop does not run.
      for (let n = Math.ceil(low / interval); n * interval <= high; n++) {
        const level = n * interval;
        const code = (sw >= level ? 1 : 0) | (se >= level ? 2 : 0) | (ne >= level ? 4 : 0) | (nw >= level ? 8 : 0);
        if (code === 0 || code === 15) continue;
        // Edges by the point at their south-west end: twice its index, plus one for those that run north.
        const south = 2 * (r * nLon + c);
        const north = 2 * ((r + 1) * nLon + c);
        const west = 2 * (r * nLon + c) + 1;
        const right = 2 * (r * nLon + east) + 1;
        const list = cuts.get(n) ?? [];
        if (list.length === 0) cuts.set(n, list);
        const centre = (sw + se + nw + ne) / 4 >= level;
        switch (code) {
          case 1:
          case 14:
            list.push(south, west);
            break;
          case 2:
          case 13:
            list.push(south, right);
            break;
          case 4:
          case 11:
            list.push(north, right);
            break;
          case 8:
          case 7:
            list.push(north, west);
            break;
          case 3:
          case 12:
            list.push(west, right);
            break;
          case 6:
          case 9:
            list.push(south, north);
            break;
          case 5:
            if (centre) list.push(south, right, north, west);
            else list.push(south, west, north, right);
            break;
          default:
            if (centre) list.push(south, west, north, right);
            else list.push(south, right, north, west);
        }
      }
    }
  }
  const lines: ContourLine[] = [];
  for (const [n, segments] of [...cuts].sort(([a], [b]) => a - b))
    for (const chain of chains(segments)) lines.push(placed(field, chain, n * interval));
  return lines;
}

/** Edge numbers of each line, in order; `segments` holds them in pairs, each edge in one or two of them. */
function chains(segments: readonly number[]): number[][] {
  const at = new Map<number, number[]>();
  segments.forEach((edge, i) => {
    const held = at.get(edge);
    if (held === undefined) at.set(edge, [i >> 1]);
    else held.push(i >> 1);
  });
  const used = new Uint8Array(segments.length / 2);
  const follow = (edge: number): number[] => {
    const found: number[] = [];
    let here = edge;
    for (;;) {
      const next = at.get(here)?.find((segment) => used[segment] === 0);
      if (next === undefined) return found;
      used[next] = 1;
      here = segments[2 * next] === here ? (segments[2 * next + 1] as number) : (segments[2 * next] as number);
      found.push(here);
    }
  };
  const out: number[][] = [];
  for (let s = 0; s < used.length; s++) {
    if (used[s] !== 0) continue;
    used[s] = 1;
    const [a, b] = [segments[2 * s] as number, segments[2 * s + 1] as number];
    const forward = [a, b, ...follow(b)];
    const back = follow(a);
    out.push([...back.reverse(), ...forward]);
  }
  return out;
}

function placed(field: FineField, edges: readonly number[], level: number): ContourLine {
  const { values, nLon, lat0, dLat, lon0, dLon } = field;
  const points = new Float64Array(2 * edges.length);
  let before = 0;
  edges.forEach((edge, i) => {
    const point = edge >> 1;
    const row = Math.floor(point / nLon);
    const column = point - row * nLon;
    const runsNorth = edge % 2 === 1;
    const a = values[point] as number;
    const b = values[runsNorth ? point + nLon : row * nLon + ((column + 1) % nLon)] as number;
    const share = (level - a) / (b - a);
    let lon = lon0 + dLon * (column + (runsNorth ? 0 : share));
    if (i > 0) lon += 360 * Math.round((before - lon) / 360);
    before = lon;
    points[2 * i] = lon;
    points[2 * i + 1] = lat0 + dLat * (row + (runsNorth ? share : 0));
  });
  return { level, points, isClosed: edges.length > 2 && edges[0] === edges[edges.length - 1] };
}
