/** A place for a text's middle. */
export interface LabelPlace {
  readonly x: number;
  readonly y: number;
  /** Radians, within ±90°. */
  readonly angle: number;
}

/** A text that wants a place. */
export interface WantedLabel {
  readonly text: string;
  readonly width: number;
  readonly height: number;
  /** px that stay free round it; 2 unless given. */
  readonly gap?: number;
  /** In the order of liking. */
  readonly places: readonly LabelPlace[];
}

export interface PlacedLabel extends LabelPlace {
  readonly text: string;
  /** Index into what was wanted. */
  readonly index: number;
}

/** A box turned about its middle. */
export interface TurnedBox extends LabelPlace {
  readonly width: number;
  readonly height: number;
}

/** px that stay free round a label. */
const GAP = 2;

export function corners({ x, y, angle, width, height }: TurnedBox): readonly (readonly [x: number, y: number])[] {
  const c = Math.cos(angle);
  const s = Math.sin(angle);
  return [
    [-1, -1],
    [1, -1],
    [1, 1],
    [-1, 1],
  ].map(([u, v]) => {
    const dx = ((u as number) * width) / 2;
    const dy = ((v as number) * height) / 2;
    return [x + c * dx - s * dy, y + s * dx + c * dy] as const;
  });
}

/** Half the length of a box's shadow on a line that runs at `direction`. */
function halfShadow(box: TurnedBox, direction: number): number {
  const turned = direction - box.angle;
  return (box.width * Math.abs(Math.cos(turned)) + box.height * Math.abs(Math.sin(turned))) / 2;
}

/** Two boxes lie apart if their shadows on one of their four sides' directions do (separating axis; Gottschalk, Lin & Manocha 1996). */
export function overlap(a: TurnedBox, b: TurnedBox): boolean {
  const dx = b.x - a.x;
  const dy = b.y - a.y;
  for (const angle of [a.angle, a.angle + Math.PI / 2, b.angle, b.angle + Math.PI / 2]) {
    const apart = Math.abs(dx * Math.cos(angle) + dy * Math.sin(angle));
    if (apart >= halfShadow(a, angle) + halfShadow(b, angle)) return false;
  }
  return true;
}

function boxOf(label: WantedLabel, place: LabelPlace): TurnedBox {
  return {
    x: place.x,
    y: place.y,
    angle: place.angle,
    width: label.width + 2 * (label.gap ?? GAP),
    height: label.height + 2 * (label.gap ?? GAP),
  };
}

/**
 * Place labels so that none lies on another or on what is taken, the earlier ones first. One whose places are all taken may
 * have one that a single other label holds, if that label has another place of its own. One that finds no place is left out.
 *
 * @param taken    Boxes that nothing may touch.
 * @param isInside Whether a box lies where labels may be.
 * @param held     Labels that stay where they are unless they touch what is taken.
 */
export function placedLabels(
  wanted: readonly WantedLabel[],
  taken: readonly TurnedBox[],
  isInside: (box: TurnedBox) => boolean,
  held: readonly PlacedLabel[] = [],
): PlacedLabel[] {
  const boxes = new Map<number, { readonly box: TurnedBox; readonly place: LabelPlace }>();
  const isFree = (box: TurnedBox): boolean => isInside(box) && !taken.some((other) => overlap(box, other));
  const put = (index: number, place: LabelPlace, box: TurnedBox): void => {
    boxes.set(index, { box, place });
  };
  const blockers = (box: TurnedBox, index: number): number[] =>
    [...boxes].filter(([other, { box: there }]) => other !== index && overlap(box, there)).map(([other]) => other);
  const findPlace = (index: number): boolean => {
    const label = wanted[index] as WantedLabel;
    for (const place of label.places) {
      const box = boxOf(label, place);
      if (!isFree(box) || blockers(box, index).length > 0) continue;
      put(index, place, box);
      return true;
    }
    return false;
  };
  /** Move one other label out of the way. */
  const makeRoom = (index: number): boolean => {
    const label = wanted[index] as WantedLabel;
    for (const place of label.places) {
      const box = boxOf(label, place);
      if (!isFree(box)) continue;
      const others = blockers(box, index);
      if (others.length !== 1) continue;
      const other = others[0] as number;
      const before = boxes.get(other) as { box: TurnedBox; place: LabelPlace };
      put(index, place, box);
      if (findPlace(other)) return true;
      boxes.delete(index);
      boxes.set(other, before);
    }
    return false;
  };
  for (const label of held) {
    const box = boxOf(wanted[label.index] as WantedLabel, label);
    if (isFree(box) && blockers(box, label.index).length === 0) put(label.index, label, box);
  }
  wanted.forEach((_, index) => {
    if (!boxes.has(index) && !findPlace(index)) makeRoom(index);
  });
  return [...boxes]
    .sort(([a], [b]) => a - b)
    .map(([index, { place }]) => ({
      x: place.x,
      y: place.y,
      angle: place.angle,
      text: (wanted[index] as WantedLabel).text,
      index,
    }));
}
