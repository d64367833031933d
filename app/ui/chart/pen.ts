/** The part of a canvas context that the drawings use; SvgPen writes the same strokes as SVG. */
export type Pen = Pick<
  CanvasRenderingContext2D,
  | "beginPath"
  | "moveTo"
  | "lineTo"
  | "closePath"
  | "arc"
  | "rect"
  | "stroke"
  | "strokeText"
  | "fillText"
  | "measureText"
  | "save"
  | "restore"
  | "translate"
  | "rotate"
  | "setLineDash"
  | "strokeStyle"
  | "fillStyle"
  | "lineWidth"
  | "lineJoin"
  | "lineCap"
  | "font"
  | "textAlign"
  | "textBaseline"
> & {
  fill(rule?: CanvasFillRule): void;
  clip(rule?: CanvasFillRule): void;
};

/** A canvas context is a pen already, but for the type of its overloads. */
export function canvasPen(context: CanvasRenderingContext2D): Pen {
  return context as Pen;
}
