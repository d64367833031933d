import { type PointerEvent, useEffect, useMemo, useRef, useState } from "react";
import { normalLongitude } from "./chart-map.ts";
import { ChartMemory, drawChart, mapFor } from "./draw-chart.ts";
import { canvasPen } from "./pen.ts";
import type { ChartProps } from "./types.ts";

export function newCanvas(width: number, height: number): HTMLCanvasElement {
  const canvas = document.createElement("canvas");
  canvas.width = width;
  canvas.height = height;
  return canvas;
}

/** True once the app's type is there: a drawing made before would keep the wrong one. */
function useFont(): boolean {
  const [ready, setReady] = useState(false);
  useEffect(() => {
    let live = true;
    const faces = ["400 12px", "560 12px", "620 12px", "640 12px"].map((size) =>
      document.fonts.load(`${size} "Sofia Sans Variable"`, "0°Nk−"),
    );
    void Promise.allSettled(faces).then(() => live && setReady(true));
    return () => {
      live = false;
    };
  }, []);
  return ready;
}

/**
 * The chart: a click moves the cursor; pulled with Shift held, the hemisphere turns.
 */
export function Chart({ view, layers, theme, width, height, isWaiting = false, onCursor, onTurn }: ChartProps) {
  const canvas = useRef<HTMLCanvasElement>(null);
  const density = Math.max(2, Math.ceil(globalThis.devicePixelRatio ?? 1));
  const memory = useMemo(() => new ChartMemory(newCanvas, density), [density]);
  const hasFont = useFont();
  const pulled = useRef<number | null>(null);

  useEffect(() => {
    const element = canvas.current;
    const context = element?.getContext("2d");
    if (!element || !context || !hasFont || width < 50 || height < 50) return;
    element.width = Math.round(width * density);
    element.height = Math.round(height * density);
    context.setTransform(density, 0, 0, density, 0, 0);
    context.clearRect(0, 0, width, height);
    drawChart(canvasPen(context), view, layers, theme, width, height, memory);
  }, [view, layers, theme, width, height, density, memory, hasFont]);

  const map = useMemo(() => mapFor(view, width, height), [view, width, height]);
  const placeOf = (event: PointerEvent): readonly [number, number] => {
    const box = (event.currentTarget as HTMLElement).getBoundingClientRect();
    return [event.clientX - box.left, event.clientY - box.top];
  };
  const angleOf = ([x, y]: readonly [number, number]): number =>
    (Math.atan2((view.hemisphere === "north" ? 1 : -1) * (x - map.cx), y - map.cy) * 180) / Math.PI;
  const follow = (event: PointerEvent): void => {
    const place = placeOf(event);
    if (pulled.current !== null && onTurn !== undefined) {
      onTurn(normalLongitude(Math.round(pulled.current - angleOf(place))));
      return;
    }
    const here = map.lonLat(...place);
    if (here !== null) onCursor(here[1], here[0]);
  };
  return (
    <canvas
      ref={canvas}
      className="chart"
      data-testid="chart"
      role="img"
      aria-label={[...layers.caption, ...layers.readout].join(", ")}
      style={{ width, height, opacity: isWaiting ? 0.4 : 1 }}
      onPointerDown={(event) => {
        event.currentTarget.setPointerCapture(event.pointerId);
        pulled.current = event.shiftKey && view.kind === "hemisphere" ? view.turn + angleOf(placeOf(event)) : null;
        follow(event);
      }}
      onPointerMove={(event) => {
        if (event.buttons === 1) follow(event);
      }}
    />
  );
}
