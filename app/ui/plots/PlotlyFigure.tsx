import type { Data, Layout } from "plotly.js";
import { useEffect, useRef } from "react";
import { PLOT_CONFIG, plotly } from "./plotly.ts";

/** Milliseconds of rest before a figure is made anew: a drag through time must not wait for it. */
const REST = 60;

interface FigureProps {
  readonly data: readonly Partial<Data>[];
  readonly layout: Partial<Layout>;
  readonly width: number;
  readonly height: number;
}

/** A Plotly figure that only shows; what is done with it happens on an overlay. */
export function PlotlyFigure({ data, layout, width, height }: FigureProps) {
  const place = useRef<HTMLDivElement>(null);
  const live = useRef(true);
  useEffect(() => {
    live.current = true;
    const element = place.current;
    return () => {
      live.current = false;
      if (element !== null) void plotly().then((module) => module.purge(element));
    };
  }, []);
  useEffect(() => {
    if (width < 20 || height < 20) return;
    const draw = (): void =>
      void plotly().then((module) => {
        if (live.current && place.current !== null)
          return module.react(place.current, data, { ...layout, width, height }, PLOT_CONFIG);
      });
    const timer = setTimeout(draw, REST);
    return () => clearTimeout(timer);
  }, [data, layout, width, height]);
  return <div ref={place} style={{ width, height }} aria-hidden="true" />;
}
