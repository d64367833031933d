import { type PointerEvent, useEffect, useMemo, useRef, useState } from "react";
import { FONT } from "../theme/tokens.ts";
import { chartLayout } from "./chart-layout.ts";
import { normalLongitude } from "./chart-map.ts";
import { ChartMemory } from "./chart-memory.ts";
import { drawChart } from "./draw-chart.ts";
import { canvasPen } from "./pen.ts";
import type { ChartProps } from "./types.ts";

const WEIGHTS = [400, 560, 620, 640] as const;
const LEAST_SIZE = 50;
/** Milliseconds from one step to the next within which time counts as moving. */
const MOVING = 150;

/** True once the app's type is there: a drawing made before would keep the wrong one. */
function useFont(): boolean {
  const [isReady, setReady] = useState(false);
  useEffect(() => {
    let isLive = true;
    const faces = WEIGHTS.map((weight) => document.fonts.load(`${weight} 12px ${FONT}`, "0°Nk−"));
    void Promise.allSettled(faces).then(() => isLive && setReady(true));
    return () => {
      isLive = false;
    };
  }, []);
  return isReady;
}

/** Where the hand took hold: degrees of the turn or the cut less those of the pointer. */
type Hold = number | null;

/** The chart: a click or a pull moves the cursor; pulled with Shift held, the hemisphere turns and the belt moves along. */
export function Chart(props: ChartProps) {
  const { view, layers, theme, width, height, isWaiting = false, onCursor, onTurn, onCut, onHover } = props;
  const canvas = useRef<HTMLCanvasElement>(null);
  const density = Math.max(1, globalThis.devicePixelRatio ?? 1);
  const memory = useMemo(() => new ChartMemory(), []);
  const hasFont = useFont();
  const hold = useRef<Hold>(null);
  const last = useRef<{ readonly values: unknown; readonly time: number }>({ values: null, time: 0 });

  useEffect(() => {
    const element = canvas.current;
    const context = element?.getContext("2d");
    if (!element || !context || !hasFont || width < LEAST_SIZE || height < LEAST_SIZE) return;
    const [wide, tall] = [Math.round(width * density), Math.round(height * density)];
    // Setting the size clears the canvas and costs a new one: only when it changes.
    if (element.width !== wide || element.height !== tall) {
      element.width = wide;
      element.height = tall;
    }
    context.setTransform(density, 0, 0, density, 0, 0);
    // Letters at fractions of a pixel: turned numbers would else be spaced unevenly.
    context.textRendering = "geometricPrecision";
    const draw = (shadingDensity: number, isMoving: boolean): void => {
      context.clearRect(0, 0, width, height);
      drawChart(
        canvasPen(context),
        { context, density, shadingDensity, isMoving },
        view,
        layers,
        theme,
        width,
        height,
        memory,
      );
    };
    // While one step follows another the shading is drawn a pixel at a time, and finely once time rests.
    const values = layers.shading?.values ?? null;
    const now = performance.now();
    const isMoving = values !== last.current.values && now - last.current.time < MOVING;
    if (values !== last.current.values) last.current = { values, time: now };
    const fine = Math.max(2, density);
    if (!isMoving) {
      draw(fine, false);
      return;
    }
    draw(1, true);
    const rest = setTimeout(() => draw(fine, false), MOVING);
    return () => clearTimeout(rest);
  }, [view, layers, theme, width, height, density, memory, hasFont]);

  const { map } = useMemo(() => chartLayout(view, width, height), [view, width, height]);
  const placeOf = (event: PointerEvent): readonly [x: number, y: number] => {
    const box = (event.currentTarget as HTMLElement).getBoundingClientRect();
    return [event.clientX - box.left, event.clientY - box.top];
  };
  /** Degrees east of the map's first longitude. */
  const eastOf = (event: PointerEvent): number => map.beyond(...placeOf(event))[0];
  const take = view.kind === "hemisphere" ? onTurn : onCut;
  const follow = (event: PointerEvent): void => {
    if (hold.current !== null && take !== undefined) {
      take(normalLongitude(Math.round(hold.current - eastOf(event))));
      return;
    }
    const here = map.lonLat(...placeOf(event));
    if (here !== null) onCursor(here[1], here[0]);
  };
  const tell = (event: PointerEvent): void => {
    if (onHover === undefined) return;
    const here = map.lonLat(...placeOf(event));
    onHover(here === null ? null : { lon: here[0], lat: here[1] });
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
        if (event.isTrusted) event.currentTarget.setPointerCapture(event.pointerId);
        hold.current = event.shiftKey && take !== undefined ? map.firstLon + eastOf(event) : null;
        follow(event);
      }}
      onPointerMove={(event) => {
        tell(event);
        if (event.buttons === 1) follow(event);
      }}
      onPointerLeave={() => onHover?.(null)}
    />
  );
}
