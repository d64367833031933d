import type { ChartMap } from "./chart-map.ts";
import type { ContourLine } from "./contour-lines.ts";
import { corners, type LabelPlace, type TurnedBox, type WantedLabel } from "./labels.ts";

/**
 * Where numbers are liked best, so that they stay put while the lines move through them: directions from the disc's middle,
 * degrees from straight down towards the right, or shares of the belt's width.
 */
const SPINES = {
  hemisphere: { bold: [42, 158, 282], half: [100, 222, 338] },
  belt: { bold: [0.2, 0.53, 0.86], half: [0.36, 0.7, 0.08] },
} as const;
/** Further from its spine a number is not wanted, degrees and share of the width. */
const SPINE_REACH = { hemisphere: 52, belt: 0.16 } as const;
/** px between the places tried along a line. */
const STRIDE = 7;
/** A line gets one number for each such length, px. */
const LENGTH_PER_LABEL = 240;
const LEAST_LENGTH = 60;
/** A line halfway between bold ones has one only if it is this long, and with this much room about it. */
const LEAST_HALF_LENGTH = 150;
const HALF_GAP = 5;
const MOST_PLACES = 16;
const HEIGHT = 10;
/** The chord under a number is at least this share of the line it spans: more bent, and the number leaves the line. */
const STRAIGHT_ENOUGH = 0.95;

/** A line on the drawing: points and the length up to each. */
interface DrawnLine {
  readonly xs: Float64Array;
  readonly ys: Float64Array;
  readonly lengths: Float64Array;
}

/** The line's pieces that lie on the map; the belt breaks lines at its edges. */
function drawnPieces(map: ChartMap, line: ContourLine): DrawnLine[] {
  const count = line.points.length / 2;
  const pieces: [number, number][][] = [[]];
  for (let i = 0; i < count; i++) {
    const [x, y] = map.xy(line.points[2 * i] as number, line.points[2 * i + 1] as number);
    const last = pieces[pieces.length - 1] as [number, number][];
    const before = last[last.length - 1];
    const isOff = map.lonLat(x, y) === null;
    const jumps = map.radius === 0 && before !== undefined && Math.abs(x - before[0]) > map.box.width / 2;
    if ((isOff || jumps) && last.length > 0) pieces.push([]);
    if (!isOff) (pieces[pieces.length - 1] as [number, number][]).push([x, y]);
  }
  return pieces
    .filter((piece) => piece.length > 4)
    .map((piece) => {
      const xs = Float64Array.from(piece, ([x]) => x);
      const ys = Float64Array.from(piece, ([, y]) => y);
      const lengths = new Float64Array(xs.length);
      for (let i = 1; i < xs.length; i++)
        lengths[i] =
          (lengths[i - 1] as number) +
          Math.hypot((xs[i] as number) - (xs[i - 1] as number), (ys[i] as number) - (ys[i - 1] as number));
      return { xs, ys, lengths };
    });
}

/** Point at a length along the line; `from` is where the search begins. */
function pointAt(line: DrawnLine, length: number, from: number): readonly [x: number, y: number, index: number] {
  const { xs, ys, lengths } = line;
  let i = Math.max(1, from);
  while (i > 1 && (lengths[i - 1] as number) > length) i--;
  while (i < lengths.length - 1 && (lengths[i] as number) < length) i++;
  const [a, b] = [lengths[i - 1] as number, lengths[i] as number];
  const share = b > a ? (length - a) / (b - a) : 0;
  return [
    (xs[i - 1] as number) + share * ((xs[i] as number) - (xs[i - 1] as number)),
    (ys[i - 1] as number) + share * ((ys[i] as number) - (ys[i - 1] as number)),
    i,
  ];
}

interface RatedPlace extends LabelPlace {
  readonly cost: number;
}

/** Places for a number of the given width along a piece, level enough and straight enough, each with what it costs. */
function placesAlong(line: DrawnLine, width: number): RatedPlace[] {
  const total = line.lengths[line.lengths.length - 1] as number;
  const half = width / 2 + 2;
  const places: RatedPlace[] = [];
  let index = 1;
  for (let length = half; length <= total - half; length += STRIDE) {
    const [x0, y0, i0] = pointAt(line, length - half, index);
    const [x, y] = pointAt(line, length, i0);
    const [x1, y1] = pointAt(line, length + half, i0);
    index = i0;
    const chord = Math.hypot(x1 - x0, y1 - y0) / (2 * half);
    if (chord < STRAIGHT_ENOUGH) continue;
    let angle = Math.atan2(y1 - y0, x1 - x0);
    if (angle > Math.PI / 2) angle -= Math.PI;
    if (angle < -Math.PI / 2) angle += Math.PI;
    // The text's middle lies midway between line and chord; steep numbers are hard to read.
    places.push({
      x: (x + (x0 + x1) / 2) / 2,
      y: (y + (y0 + y1) / 2) / 2,
      angle,
      cost: 12 * (1 - chord) + 0.35 * Math.abs(angle) ** 2,
    });
  }
  return places;
}

/** How far a place lies from a spine, in units of the spine's reach. */
function spineDistance(map: ChartMap, place: LabelPlace, spine: number): number {
  if (map.radius === 0) return Math.abs((place.x - map.box.x) / map.box.width - spine) / SPINE_REACH.belt;
  const angle = (Math.atan2(place.x - map.cx, place.y - map.cy) * 180) / Math.PI;
  return Math.abs(((((angle - spine + 180) % 360) + 360) % 360) - 180) / SPINE_REACH.hemisphere;
}

/**
 * Numbers wanted on the contours, the most important first: one for each bold line, then one for each line halfway between
 * bold ones, then a second and third where the lines are long.
 *
 * @param textWidth Width of a text in the labels' font, px.
 */
export function lineLabels(
  map: ChartMap,
  lines: readonly ContourLine[],
  interval: number,
  boldEach: number,
  textWidth: (text: string) => number,
): WantedLabel[] {
  const halfEach = boldEach % 2 === 0 ? boldEach / 2 : boldEach;
  const rounds: WantedLabel[][] = [[], [], [], []];
  for (const line of lines) {
    const multiple = Math.round(line.level / interval);
    const isBold = multiple % boldEach === 0;
    if (!isBold && multiple % halfEach !== 0) continue;
    const text = levelText(line.level);
    const width = textWidth(text);
    const pieces = drawnPieces(map, line);
    const length = pieces.reduce((sum, { lengths }) => sum + (lengths[lengths.length - 1] as number), 0);
    if (length < (isBold ? LEAST_LENGTH : LEAST_HALF_LENGTH)) continue;
    const places = pieces.flatMap((piece) => placesAlong(piece, width));
    const spines = SPINES[map.view.kind][isBold ? "bold" : "half"];
    const sets = spines
      .map((spine) =>
        places
          .map((place) => ({ ...place, cost: place.cost + spineDistance(map, place, spine) ** 2 }))
          .filter((place) => spineDistance(map, place, spine) < 1)
          .sort((a, b) => a.cost - b.cost)
          .slice(0, MOST_PLACES),
      )
      .filter((set) => set.length > 0)
      .sort((a, b) => (a[0] as RatedPlace).cost - (b[0] as RatedPlace).cost)
      .slice(0, isBold ? Math.max(1, Math.floor(length / LENGTH_PER_LABEL)) : 1);
    // A short line away from every spine still has its number.
    if (sets.length === 0 && isBold && places.length > 0)
      sets.push([...places].sort((a, b) => a.cost - b.cost).slice(0, MOST_PLACES));
    sets.forEach((set, i) => {
      const label: WantedLabel = { text, width, height: HEIGHT, places: set };
      if (isBold) (rounds[i === 0 ? 0 : i + 1] as WantedLabel[]).push(label);
      else (rounds[1] as WantedLabel[]).push({ ...label, gap: HALF_GAP });
    });
  }
  return rounds.flat();
}

/** A contour's number: as many digits as it has, without the noise of binary fractions. */
export function levelText(level: number): string {
  return String(Number(level.toPrecision(8))).replace("-", "−");
}

/** Whether a box lies on the map, clear of the names of the meridians along the rim. */
export function isOnMap(map: ChartMap): (box: TurnedBox) => boolean {
  const { x, y, width, height } = map.box;
  if (map.radius === 0)
    return (box) => corners(box).every(([u, v]) => u > x + 1 && u < x + width - 1 && v > y + 1 && v < y + height - 1);
  return (box) => corners(box).every(([u, v]) => Math.hypot(u - map.cx, v - map.cy) < map.radius - 3);
}
