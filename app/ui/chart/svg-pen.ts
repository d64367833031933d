import type { Pen } from "./pen.ts";

export const escaped = (text: string): string =>
  text.replace(/[&<>"]/g, (c) => ({ "&": "&amp;", "<": "&lt;", ">": "&gt;", '"': "&quot;" })[c] as string);

/** Hundredths of a pixel are enough. */
const short = (n: number): string => String(Math.round(n * 100) / 100);

/** `#RRGGBB` and an opacity from what a canvas takes as a colour: SVG's readers know no `rgba()` in attributes. */
function paint(name: "fill" | "stroke", colour: string): string {
  const match = /^rgba\((\d+), (\d+), (\d+), ([\d.]+)\)$/.exec(colour);
  if (match === null) return ` ${name}="${colour}"`;
  const [r, g, b] = [match[1], match[2], match[3]].map((part) => Number(part).toString(16).padStart(2, "0"));
  return ` ${name}="#${r}${g}${b}" ${name}-opacity="${match[4]}"`;
}

interface PenState {
  strokeStyle: string;
  fillStyle: string;
  lineWidth: number;
  lineJoin: CanvasLineJoin;
  lineCap: CanvasLineCap;
  font: string;
  textAlign: CanvasTextAlign;
  textBaseline: CanvasTextBaseline;
  dash: readonly number[];
  transform: string;
  /** Groups to close at the matching restore. */
  groups: number;
}

const FIRST_STATE: PenState = {
  strokeStyle: "#000000",
  fillStyle: "#000000",
  lineWidth: 1,
  lineJoin: "miter",
  lineCap: "butt",
  font: "12px sans-serif",
  textAlign: "start",
  textBaseline: "alphabetic",
  dash: [],
  transform: "",
  groups: 0,
};

/** Share of the type's size that lies between a text's baseline and its middle; readers differ on SVG's own baselines. */
const MIDDLE = 0.35;

/** Writes what it is told to draw as SVG elements. */
export class SvgPen implements Pen {
  readonly #parts: string[] = [];
  readonly #measure: (text: string, font: string) => number;
  readonly #held: PenState[] = [];
  #state: PenState = { ...FIRST_STATE };
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
  set strokeStyle(value: string | CanvasGradient | CanvasPattern) {
    this.#state.strokeStyle = String(value);
  }
  get fillStyle(): string {
    return this.#state.fillStyle;
  }
  set fillStyle(value: string | CanvasGradient | CanvasPattern) {
    this.#state.fillStyle = String(value);
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
    this.#path += `${this.#path === "" ? "M" : "L"}${short(x)} ${short(y)}`;
  }
  closePath(): void {
    if (this.#path !== "") this.#path += "Z";
  }
  rect(x: number, y: number, width: number, height: number): void {
    this.#path += `M${short(x)} ${short(y)}h${short(width)}v${short(height)}h${short(-width)}Z`;
  }
  /** Clockwise on the drawing unless `counterclockwise`, as the canvas's. */
  arc(x: number, y: number, radius: number, start: number, end: number, counterclockwise = false): void {
    const at = (angle: number): string =>
      `${short(x + radius * Math.cos(angle))} ${short(y + radius * Math.sin(angle))}`;
    const r = short(radius);
    const sweep = counterclockwise ? 0 : 1;
    const span = Math.abs(end - start);
    this.#path += `${this.#path === "" || this.#path.endsWith("Z") ? "M" : "L"}${at(start)}`;
    if (span >= 2 * Math.PI - 1e-9) {
      this.#path += `A${r} ${r} 0 1 ${sweep} ${at(start + Math.PI)}A${r} ${r} 0 1 ${sweep} ${at(start)}`;
      return;
    }
    this.#path += `A${r} ${r} 0 ${span > Math.PI ? 1 : 0} ${sweep} ${at(end)}`;
  }

  #transform(): string {
    const { transform } = this.#state;
    return transform === "" ? "" : ` transform="${transform.trim()}"`;
  }
  #stroke(): string {
    const { strokeStyle, lineWidth, lineJoin, lineCap, dash } = this.#state;
    const rest = `${lineJoin === "miter" ? "" : ` stroke-linejoin="${lineJoin}"`}${lineCap === "butt" ? "" : ` stroke-linecap="${lineCap}"`}`;
    const dashes = dash.length === 0 ? "" : ` stroke-dasharray="${dash.join(" ")}"`;
    return `${paint("stroke", strokeStyle)} stroke-width="${short(lineWidth)}"${rest}${dashes}`;
  }
  stroke(): void {
    if (this.#path !== "")
      this.#parts.push(`<path d="${this.#path}" fill="none"${this.#stroke()}${this.#transform()}/>`);
  }
  fill(rule: CanvasFillRule = "nonzero"): void {
    if (this.#path === "") return;
    const rules = rule === "evenodd" ? ` fill-rule="evenodd"` : "";
    this.#parts.push(`<path d="${this.#path}"${paint("fill", this.#state.fillStyle)}${rules}${this.#transform()}/>`);
  }
  clip(rule: CanvasFillRule = "nonzero"): void {
    const id = `clip${this.#clips++}`;
    const rules = rule === "evenodd" ? ` clip-rule="evenodd"` : "";
    this.#parts.push(
      `<clipPath id="${id}"><path d="${this.#path}"${rules}${this.#transform()}/></clipPath><g clip-path="url(#${id})">`,
    );
    this.#state.groups += 1;
  }

  #text(text: string, x: number, y: number, how: string): void {
    const { textAlign, textBaseline, font } = this.#state;
    const anchor = textAlign === "center" ? "middle" : textAlign === "right" || textAlign === "end" ? "end" : "start";
    const size = Number(/([\d.]+)px/.exec(font)?.[1] ?? 12);
    const base = y + (textBaseline === "middle" ? MIDDLE * size : textBaseline === "top" ? 0.8 * size : 0);
    this.#parts.push(
      `<text x="${short(x)}" y="${short(base)}" style="font:${escaped(font)}" text-anchor="${anchor}"${how}${this.#transform()}>${escaped(text)}</text>`,
    );
  }
  fillText(text: string, x: number, y: number): void {
    this.#text(text, x, y, paint("fill", this.#state.fillStyle));
  }
  strokeText(text: string, x: number, y: number): void {
    this.#text(text, x, y, ` fill="none"${this.#stroke()}`);
  }
  measureText(text: string): TextMetrics {
    return { width: this.#measure(text, this.#state.font) } as TextMetrics;
  }
}
