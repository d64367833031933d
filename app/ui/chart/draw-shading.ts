import { THEMES, type ThemeName, type Tokens } from "../theme/tokens.ts";
import type { ChartMap } from "./chart-map.ts";
import { outline } from "./draw-ground.ts";
import type { FineField } from "./fine-grid.ts";
import type { Pen } from "./pen.ts";
import { bandRings, missingRings, type Plane, type Rings, sampledPlane } from "./plane-rings.ts";

/** px between the samples that outlines are made from. */
const RING_SPACING = 2;
const MASK_SPACING = 3;

function fillRings(pen: Pen, rings: Rings["rings"], colour: string): void {
  pen.beginPath();
  for (const ring of rings) traceRing(pen, ring);
  pen.fillStyle = colour;
  pen.fill("evenodd");
}

function traceRing(pen: Pen, ring: Float64Array): void {
  for (let i = 0; i < ring.length; i += 2)
    if (i === 0) pen.moveTo(ring[0] as number, ring[1] as number);
    else pen.lineTo(ring[i] as number, ring[i + 1] as number);
  pen.closePath();
}

/** The shading as filled areas, for drawings that must stay sharp at any size. */
export function drawBands(pen: Pen, map: ChartMap, field: FineField, step: number, theme: ThemeName): void {
  const tokens = THEMES[theme];
  pen.save();
  outline(pen, map);
  pen.clip();
  for (const { band, rings } of bandRings(sampledPlane(map, field, RING_SPACING), step))
    fillRings(pen, rings, (band > 0 ? tokens.above : tokens.below)[Math.abs(band) - 1] as string);
  pen.restore();
}

/** Dots and a dashed edge where there is no value. */
export function drawMask(pen: Pen, map: ChartMap, field: FineField, tokens: Tokens): Plane {
  const plane = sampledPlane(map, field, MASK_SPACING);
  const rings = missingRings(plane);
  pen.save();
  outline(pen, map);
  pen.clip();
  pen.save();
  pen.beginPath();
  for (const ring of rings) traceRing(pen, ring);
  pen.clip("evenodd");
  pen.fillStyle = tokens.rule2;
  pen.beginPath();
  const { x, y, width, height } = map.box;
  for (let v = y + 1; v < y + height; v += 5)
    for (let u = x + 1 + (Math.round((v - y) / 5) % 2) * 2.5; u < x + width; u += 5) {
      pen.moveTo(u + 0.8, v);
      pen.arc(u, v, 0.8, 0, 2 * Math.PI);
    }
  pen.fill();
  pen.restore();
  pen.beginPath();
  for (const ring of rings) traceRing(pen, ring);
  pen.strokeStyle = tokens.rule2;
  pen.lineWidth = 1;
  pen.setLineDash([4, 3]);
  pen.stroke();
  pen.restore();
  return plane;
}
