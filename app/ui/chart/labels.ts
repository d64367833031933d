/** A text that wants a place; the first of its places that is free is its own. */
export interface LabelPlace {
  readonly x: number;
  readonly y: number;
  /** Radians, within ±90°. */
  readonly angle: number;
}
export interface WantedLabel {
  readonly text: string;
  readonly width: number;
  readonly height: number;
  /** In the order of liking. */
  readonly places: readonly LabelPlace[];
}
export interface PlacedLabel extends LabelPlace {
  readonly text: string;
  /** Index into what was wanted. */
  readonly index: number;
}
export interface Box {
  readonly x0: number;
  readonly y0: number;
  readonly x1: number;
  readonly y1: number;
}

/** The upright box round a turned text, `gap` px clear of it. */
export function labelBox(place: LabelPlace, width: number, height: number, gap = 2): Box {
  const c = Math.abs(Math.cos(place.angle));
  const s = Math.abs(Math.sin(place.angle));
  const w = (width * c + height * s) / 2 + gap;
  const h = (width * s + height * c) / 2 + gap;
  return { x0: place.x - w, y0: place.y - h, x1: place.x + w, y1: place.y + h };
}

export function overlap(a: Box, b: Box): boolean {
  return a.x0 < b.x1 && b.x0 < a.x1 && a.y0 < b.y1 && b.y0 < a.y1;
}

/**
 * Place labels so that none lies on another or on what is taken, the earlier ones first. One that finds no place is left out.
 *
 * @param taken Boxes that nothing may touch.
 * @param inside Whether a box lies where labels may be.
 */
export function placedLabels(
  wanted: readonly WantedLabel[],
  taken: readonly Box[],
  inside: (box: Box) => boolean,
): PlacedLabel[] {
  const boxes = [...taken];
  const placed: PlacedLabel[] = [];
  wanted.forEach((label, index) => {
    for (const place of label.places) {
      const box = labelBox(place, label.width, label.height);
      if (!inside(box) || boxes.some((other) => overlap(box, other))) continue;
      boxes.push(box);
      placed.push({ ...place, text: label.text, index });
      return;
    }
  });
  return placed;
}
