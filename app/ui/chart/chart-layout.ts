import { BELT_LATITUDES, beltMap, type ChartMap, hemisphereMap, MOST_STRETCH, type Rectangle } from "./chart-map.ts";
import type { ChartView } from "./types.ts";

/** From the map's edge outward: the alternating frame. */
export const FRAME_GAP = 7;
export const FRAME_WIDTH = 5;
/** How far the rim's curve swings to either side of its base. */
export const RIM_REACH = 11;
/** From the disc's edge to the base of the rim's curve, and to all that is drawn round it. */
export const RIM_BASE = FRAME_GAP + FRAME_WIDTH / 2 + 2.5 + RIM_REACH;
const ROUND = RIM_BASE + RIM_REACH + 6;

/** Texts stand in the corners: the disc keeps clear of boxes this large. */
const CORNERS = {
  caption: { width: 126, height: 50 },
  readout: { width: 108, height: 50 },
  contourKey: { width: 96, height: 62 },
} as const;
/** The colour key is bent round the lower left; this much radius for itself and its numbers. */
const BENT_KEY = 20;
const LEAST_RADIUS = 40;

/** The belt's parts from its top: texts, frame, map, frame, names of meridians, strip, keys. */
const BELT = {
  left: 44,
  right: 16,
  texts: 20,
  frame: 11,
  names: 24,
  stripText: 18,
  strip: 110,
  leastStrip: 36,
  keys: 34,
  moreKeys: 54,
} as const;
/** Under this width caption and readout take a line each, and so do the keys. */
const ONE_LINE = 660;

export interface ChartLayout {
  readonly map: ChartMap;
  /** Lowest line of the drawing: the keys stand on it. */
  readonly foot: number;
  /** Belt: where the departure along the band is drawn, on the map's own longitudes; null round a disc. */
  readonly strip: Rectangle | null;
  /** Belt: caption and readout share a line, and so do the keys. */
  readonly isOneLine: boolean;
}

/** Where everything of a chart lies in a drawing of the given size. */
export function chartLayout(view: ChartView, width: number, height: number): ChartLayout {
  return view.kind === "hemisphere" ? hemisphereLayout(view, width, height) : beltLayout(view, width, height);
}

/** The largest disc that, with what is drawn round it, touches neither the edges nor the texts in the corners. */
function hemisphereLayout(view: ChartView, width: number, height: number): ChartLayout {
  const cx = width / 2;
  const { caption, readout, contourKey } = CORNERS;
  let best = { cy: height / 2, outer: 0 };
  for (let cy = height / 2 - 12; cy <= height / 2 + 24; cy += 2) {
    const outer = Math.min(
      cx,
      cy,
      height - cy,
      Math.hypot(cx - caption.width, cy - caption.height),
      Math.hypot(width - readout.width - cx, cy - readout.height),
      Math.hypot(width - contourKey.width - cx, height - contourKey.height - cy),
      // The bent key's lower end stands 30° from straight down, its upper one 66°.
      (height - cy - 14) / Math.cos(Math.PI / 6) - BENT_KEY,
      (cx - 32) / Math.sin((66 * Math.PI) / 180) - BENT_KEY,
    );
    if (outer > best.outer) best = { cy, outer };
  }
  const radius = Math.max(LEAST_RADIUS, Math.floor(best.outer - ROUND));
  const box = { x: cx - radius, y: best.cy - radius, width: 2 * radius, height: 2 * radius };
  return { map: hemisphereMap(view, { width, height, box }), foot: height, strip: null, isOneLine: false };
}

function beltLayout(view: ChartView, width: number, height: number): ChartLayout {
  const isOneLine = width >= ONE_LINE;
  const top = (isOneLine ? BELT.texts : BELT.texts + 15) + BELT.frame;
  const keys = isOneLine ? BELT.keys : BELT.moreKeys;
  const wide = Math.max(100, width - BELT.left - BELT.right);
  const room = height - top - BELT.frame - BELT.names - BELT.stripText - keys;
  const [low, high] = BELT_LATITUDES;
  const tall = Math.max(60, Math.min(room - BELT.leastStrip, ((wide * MOST_STRETCH) / 360) * (high - low)));
  const box = { x: BELT.left, y: top, width: wide, height: Math.floor(tall) };
  const stripTop = top + box.height + BELT.frame + BELT.names + BELT.stripText;
  const stripHeight = Math.max(20, Math.min(BELT.strip, room - box.height));
  const strip = { x: box.x, y: stripTop, width: wide, height: stripHeight };
  const foot = Math.min(height, stripTop + stripHeight + keys);
  return { map: beltMap(view, { width, height, box }), foot, strip, isOneLine };
}
