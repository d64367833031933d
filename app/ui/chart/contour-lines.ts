/** A field on an even grid, as both the fine grid of a hemisphere and a plane of samples are. */
export interface EvenField {
  /** (nLat, nLon), row-major; NaN is missing. */
  readonly values: Float32Array;
  readonly nLat: number;
  readonly nLon: number;
  readonly lat0: number;
  readonly dLat: number;
  readonly lon0: number;
  readonly dLon: number;
  /** The last column's neighbour is the first. */
  readonly closesCircle: boolean;
}

/** One line of equal value, as longitudes and latitudes in turn; a closed one ends where it began. */
export interface ContourLine {
  readonly level: number;
  readonly points: Float64Array;
  readonly isClosed: boolean;
}

/**
 * Lines of equal value by marching squares, joined end to end.
 *
 * Cells at the grid's seam are neighbours where it closes the circle; longitudes then run on past 360°. A saddle is resolved
 * by the mean of its corners. Cells with a missing corner have no line.
 *
 * @param interval Lines at every multiple of it …
 * @param lowest,highest … from this multiple to that.
 */
export function contourLines(
  field: EvenField,
  interval: number,
  lowest = Number.NEGATIVE_INFINITY,
  highest = Number.POSITIVE_INFINITY,
): ContourLine[] {
  const { values, nLat, nLon, closesCircle } = field;
  const columns = closesCircle ? nLon : nLon - 1;
  /** Edges in pairs, one pair per cell crossed, by the multiple of the interval. */
  const cuts = new Map<number, number[]>();
  for (let r = 0; r + 1 < nLat; r++) {
    for (let c = 0; c < columns; c++) {
      const east = c + 1 === nLon ? 0 : c + 1;
      const sw = values[r * nLon + c] as number;
      const se = values[r * nLon + east] as number;
      const nw = values[(r + 1) * nLon + c] as number;
      const ne = values[(r + 1) * nLon + east] as number;
      // Math.min of a missing value is missing, and the loop does not run.
      const low = Math.max(lowest, Math.ceil(Math.min(sw, se, nw, ne) / interval));
      const high = Math.min(highest, Math.floor(Math.max(sw, se, nw, ne) / interval));
      for (let n = low; n <= high; n++) {
        const level = n * interval;
        const code = (sw >= level ? 1 : 0) | (se >= level ? 2 : 0) | (ne >= level ? 4 : 0) | (nw >= level ? 8 : 0);
        if (code === 0 || code === 15) continue;
        let list = cuts.get(n);
        if (list === undefined) {
          list = [];
          cuts.set(n, list);
        }
        // Edges by the point at their south-west end: twice its index, plus one for those that run north.
        const south = 2 * (r * nLon + c);
        const north = 2 * ((r + 1) * nLon + c);
        const west = south + 1;
        const right = 2 * (r * nLon + east) + 1;
        addCut(list, code, (sw + se + nw + ne) / 4 >= level, south, right, north, west);
      }
    }
  }
  const links = {
    first: new Int32Array(2 * values.length).fill(-1),
    second: new Int32Array(2 * values.length).fill(-1),
  };
  const lines: ContourLine[] = [];
  for (const [n, segments] of [...cuts].sort(([a], [b]) => a - b))
    for (const chain of chains(segments, links)) lines.push(placed(field, chain, n * interval));
  return lines;
}

/** The cell's edges that the line crosses; bits of `code`, from the lowest: south-west, south-east, north-east, north-west are high. */
function addCut(
  list: number[],
  code: number,
  isCentreHigh: boolean,
  south: number,
  east: number,
  north: number,
  west: number,
): void {
  switch (code) {
    case 1:
    case 14:
      list.push(south, west);
      break;
    case 2:
    case 13:
      list.push(south, east);
      break;
    case 4:
    case 11:
      list.push(north, east);
      break;
    case 8:
    case 7:
      list.push(north, west);
      break;
    case 3:
    case 12:
      list.push(west, east);
      break;
    case 6:
    case 9:
      list.push(south, north);
      break;
    case 5:
      if (isCentreHigh) list.push(south, east, north, west);
      else list.push(south, west, north, east);
      break;
    default:
      if (isCentreHigh) list.push(south, west, north, east);
      else list.push(south, east, north, west);
  }
}

/** By edge, the one or two segments that meet there; −1 is none. */
interface Links {
  readonly first: Int32Array;
  readonly second: Int32Array;
}

/** Edge numbers of each line, in order; `links` is clear before and after. */
function chains(segments: readonly number[], links: Links): number[][] {
  const { first, second } = links;
  segments.forEach((edge, i) => {
    if (first[edge] === -1) first[edge] = i >> 1;
    else second[edge] = i >> 1;
  });
  const used = new Uint8Array(segments.length / 2);
  const follow = (start: number): number[] => {
    const found: number[] = [];
    let here = start;
    for (;;) {
      let next = first[here] as number;
      if (used[next] === 1) next = second[here] as number;
      if (next === -1 || used[next] === 1) return found;
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
    out.push(back.length === 0 ? forward : [...back.reverse(), ...forward]);
  }
  for (const edge of segments) {
    first[edge] = -1;
    second[edge] = -1;
  }
  return out;
}

function placed(field: EvenField, edges: readonly number[], level: number): ContourLine {
  const { values, nLon, lat0, dLat, lon0, dLon, closesCircle } = field;
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
    if (closesCircle && i > 0) lon += 360 * Math.round((before - lon) / 360);
    before = lon;
    points[2 * i] = lon;
    points[2 * i + 1] = lat0 + dLat * (row + (runsNorth ? share : 0));
  });
  return { level, points, isClosed: edges.length > 2 && edges[0] === edges[edges.length - 1] };
}
