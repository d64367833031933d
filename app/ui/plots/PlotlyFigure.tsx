import type { Data, Layout } from "plotly.js";
import { useEffect, useRef } from "react";
import { PLOT_CONFIG, plotly } from "./plotly.ts";

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
    void plotly().then((module) => {
      if (live.current && place.current !== null)
        return module.react(place.current, data, { ...layout, width, height }, PLOT_CONFIG);
    });
  }, [data, layout, width, height]);
  return <div ref={place} style={{ width, height }} aria-hidden="true" />;
}
