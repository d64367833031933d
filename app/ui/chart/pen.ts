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
  | "fill"
  | "fillText"
  | "strokeText"
  | "measureText"
  | "save"
  | "restore"
  | "clip"
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
  | "globalAlpha"
> & {
  /** A picture of the pixels given, stretched over the rectangle. */
  picture(source: PixelPicture, x: number, y: number, width: number, height: number): void;
};

/** Pixels that both pens can place: a canvas, and its text for SVG. */
export interface PixelPicture {
  readonly canvas: CanvasImageSource;
  dataUrl(): string;
}

/** A canvas context as a pen. */
export function canvasPen(context: CanvasRenderingContext2D): Pen {
  const pen = context as unknown as Pen & CanvasRenderingContext2D;
  pen.picture = (source, x, y, width, height) => context.drawImage(source.canvas, x, y, width, height);
  return pen;
}

const escaped = (text: string): string =>
  text.replace(/[&<>"]/g, (c) => ({ "&": "&amp;", "<": "&lt;", ">": "&gt;", '"': "&quot;" })[c] as string);
const short = (n: number): string => String(Math.round(n * 100) / 100);

interface PenState {
  strokeStyle: string;
  fillStyle: string;
  lineWidth: number;
  lineJoin: CanvasLineJoin;
  lineCap: CanvasLineCap;
  font: string;
  textAlign: CanvasTextAlign;
  textBaseline: CanvasTextBaseline;
  globalAlpha: number;
  dash: readonly number[];
  transform: string;
  /** Groups to close at the matching restore. */
  groups: number;
}

/** Writes what it is told to draw as SVG elements. */
export class SvgPen {
  readonly #parts: string[] = [];
  readonly #measure: (text: string, font: string) => number;
  readonly #held: PenState[] = [];
  #state: PenState = {
    strokeStyle: "#000",
    fillStyle: "#000",
    lineWidth: 1,
    lineJoin: "miter",
    lineCap: "butt",
    font: "12px sans-serif",
    textAlign: "start",
    textBaseline: "alphabetic",
    globalAlpha: 1,
    dash: [],
    transform: "",
    groups: 0,
  };
  #path = "";
  #clips = 0;

  /** @param measure Width of a text in a font, px. */
  constructor(measure: (text: string, font: string) => number) {
    this.#measure = measure;
  }

  /** The elements drawn so far. */
  get content(): string {
    return this.#parts.join("\n");
  }

  get strokeStyle(): string {
    return this.#state.strokeStyle;
  }
  set strokeStyle(value: string) {
    this.#state.strokeStyle = value;
  }
  get fillStyle(): string {
    return this.#state.fillStyle;
  }
  set fillStyle(value: string) {
    this.#state.fillStyle = value;
  }
  get lineWidth(): number {
    return this.#state.lineWidth;
  }
  set lineWidth(value: number) {
    this.#state.lineWidth = value;
  }
  get lineJoin(): CanvasLineJoin {
    return this.#state.lineJoin;
  }
  set lineJoin(value: CanvasLineJoin) {
    this.#state.lineJoin = value;
  }
  get lineCap(): CanvasLineCap {
    return this.#state.lineCap;
  }
  set lineCap(value: CanvasLineCap) {
    this.#state.lineCap = value;
  }
  get font(): string {
    return this.#state.font;
  }
  set font(value: string) {
    this.#state.font = value;
  }
  get textAlign(): CanvasTextAlign {
    return this.#state.textAlign;
  }
  set textAlign(value: CanvasTextAlign) {
    this.#state.textAlign = value;
  }
  get textBaseline(): CanvasTextBaseline {
    return this.#state.textBaseline;
  }
  set textBaseline(value: CanvasTextBaseline) {
    this.#state.textBaseline = value;
  }
  get globalAlpha(): number {
    return this.#state.globalAlpha;
  }
  set globalAlpha(value: number) {
    this.#state.globalAlpha = value;
  }

  save(): void {
    this.#held.push({ ...this.#state });
    this.#state.groups = 0;
  }
  restore(): void {
    for (let i = 0; i < this.#state.groups; i++) this.#parts.push("</g>");
    this.#state = this.#held.pop() ?? this.#state;
  }
  translate(x: number, y: number): void {
    this.#state.transform += ` translate(${short(x)} ${short(y)})`;
  }
  rotate(angle: number): void {
    this.#state.transform += ` rotate(${short((angle * 180) / Math.PI)})`;
  }
  setLineDash(dash: Iterable<number>): void {
    this.#state.dash = [...dash];
  }
  beginPath(): void {
    this.#path = "";
  }
  moveTo(x: number, y: number): void {
    this.#path += `M${short(x)} ${short(y)}`;
  }
  lineTo(x: number, y: number): void {
    this.#path += `L${short(x)} ${short(y)}`;
  }
  closePath(): void {
    this.#path += "Z";
  }
  rect(x: number, y: number, width: number, height: number): void {
    this.#path += `M${short(x)} ${short(y)}h${short(width)}v${short(height)}h${short(-width)}Z`;
  }
  arc(x: number, y: number, radius: number, start: number, end: number): void {
    const at = (angle: number): string =>
      `${short(x + radius * Math.cos(angle))} ${short(y + radius * Math.sin(angle))}`;
    const r = short(radius);
    const begin = `${this.#path === "" || this.#path.endsWith("Z") ? "M" : "L"}${at(start)}`;
    if (Math.abs(end - start) >= 2 * Math.PI - 1e-9) {
      this.#path += `M${at(start)}A${r} ${r} 0 1 1 ${at(start + Math.PI)}A${r} ${r} 0 1 1 ${at(start)}Z`;
      return;
    }
    this.#path += `${begin}A${r} ${r} 0 ${end - start > Math.PI ? 1 : 0} 1 ${at(end)}`;
  }
  #common(): string {
    const { transform, globalAlpha } = this.#state;
    return `${transform === "" ? "" : ` transform="${transform.trim()}"`}${globalAlpha === 1 ? "" : ` opacity="${globalAlpha}"`}`;
  }
  #strokeAttributes(): string {
    const { strokeStyle, lineWidth, lineJoin, lineCap, dash } = this.#state;
    return ` stroke="${strokeStyle}" stroke-width="${short(lineWidth)}" stroke-linejoin="${lineJoin}" stroke-linecap="${lineCap}"${dash.length === 0 ? "" : ` stroke-dasharray="${dash.join(" ")}"`}`;
  }
  stroke(): void {
    if (this.#path !== "")
      this.#parts.push(`<path d="${this.#path}" fill="none"${this.#strokeAttributes()}${this.#common()}/>`);
  }
  fill(): void {
    if (this.#path !== "")
      this.#parts.push(`<path d="${this.#path}" fill="${this.#state.fillStyle}"${this.#common()}/>`);
  }
  clip(): void {
    const id = `clip${this.#clips++}`;
    this.#parts.push(
      `<clipPath id="${id}"><path d="${this.#path}"${this.#common()}/></clipPath><g clip-path="url(#${id})">`,
    );
    this.#state.groups += 1;
  }
  #text(text: string, x: number, y: number, paint: string): void {
    const { textAlign, textBaseline, font } = this.#state;
    const anchor = textAlign === "center" ? "middle" : textAlign === "right" || textAlign === "end" ? "end" : "start";
    const baseline =
      textBaseline === "middle"
        ? ` dominant-baseline="central"`
        : textBaseline === "top"
          ? ` dominant-baseline="hanging"`
          : "";
    this.#parts.push(
      `<text x="${short(x)}" y="${short(y)}" style="font:${escaped(font)}" text-anchor="${anchor}"${baseline}${paint}${this.#common()}>${escaped(text)}</text>`,
    );
  }
  fillText(text: string, x: number, y: number): void {
    this.#text(text, x, y, ` fill="${this.#state.fillStyle}"`);
  }
  strokeText(text: string, x: number, y: number): void {
    this.#text(text, x, y, ` fill="none"${this.#strokeAttributes()}`);
  }
  measureText(text: string): TextMetrics {
    return { width: this.#measure(text, this.#state.font) } as TextMetrics;
  }
  picture(source: PixelPicture, x: number, y: number, width: number, height: number): void {
    this.#parts.push(
      `<image href="${source.dataUrl()}" x="${short(x)}" y="${short(y)}" width="${short(width)}" height="${short(height)}" preserveAspectRatio="none"${this.#common()}/>`,
    );
  }
}
