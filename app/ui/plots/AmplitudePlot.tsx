import type { Data, Layout } from "plotly.js";
import { useMemo } from "react";
import type { StepAxis } from "../../../core/field/axes.ts";
import type { WaveSeries } from "../reading/wave-series.ts";
import { numberText, unitText } from "../text/number-text.ts";
import { stepTicks } from "../text/step-name.ts";
import { FONT, THEMES, type ThemeName, waveColour } from "../theme/tokens.ts";
import { PlotlyFigure } from "./PlotlyFigure.tsx";

interface AmplitudePlotProps {
  readonly series: WaveSeries;
  readonly steps: StepAxis;
  readonly step: number;
  readonly units: string;
  readonly theme: ThemeName;
  readonly width: number;
  readonly height: number;
  readonly chosen: number | null;
}

const DAYS = 20;
const RIGHT = 26;
const TOP = 5;
const BOTTOM = 19;

const ROUND = [1, 2, 5] as const;

/** A round number below `top`, above half of its height, for the one line across the plot. */
function niceBelow(top: number): number {
  const power = 10 ** Math.floor(Math.log10(top));
  const under = ROUND.map((round) => round * power).filter((value) => value <= 0.94 * top);
  return under.at(-1) ?? (5 * power) / 10;
}

/** Amplitude of each wave over the last twenty days; over all steps shown, on a record that is not a time. */
export function AmplitudePlot({ series, steps, step, units, theme, width, height, chosen }: AmplitudePlotProps) {
  const tokens = THEMES[theme];
  const [from, to] = useMemo(() => {
    if (steps.kind !== "time") return [series.span[0], series.span[1] - 1];
    let first = step;
    while (first > series.span[0] && steps.values[step] - steps.values[first - 1] <= DAYS + 1e-6) first -= 1;
    return [first, step];
  }, [series, steps, step]);
  const { data, layout, labels, line } = useMemo(() => {
    const indices = Array.from({ length: to - from + 1 }, (_, i) => from + i);
    let most = 0;
    for (const k of series.waves) for (const i of indices) most = Math.max(most, series.value("amplitude", i, k) || 0);
    const top = most > 0 ? most * 1.06 : 1;
    const line = niceBelow(top);
    const curves: Partial<Data>[] = series.waves.map((k) => ({
      type: "scatter",
      mode: indices.length > 1 ? "lines" : "markers",
      x: indices,
      y: indices.map((i) => series.value("amplitude", i, k)),
      line: { color: waveColour(k, theme), width: k === chosen ? 2.6 : 1.2 },
      marker: { color: waveColour(k, theme), size: 5 },
      cliponaxis: false,
      hoverinfo: "skip",
    }));
    const ticks = stepTicks(steps, from, to + 1, 5);
    const frame: Partial<Layout> = {
      margin: { l: 6, r: RIGHT, t: TOP, b: BOTTOM },
      paper_bgcolor: "rgba(0,0,0,0)",
      plot_bgcolor: "rgba(0,0,0,0)",
      showlegend: false,
      font: { family: FONT, size: 11.5, color: tokens.ink2 },
      xaxis: {
        range: [from, Math.max(to, from + 1)],
        tickvals: ticks.map(({ index }) => index),
        ticktext: ticks.map(({ text }) => text),
        showgrid: false,
        zeroline: false,
        linecolor: tokens.rule2,
        ticks: "outside",
        ticklen: 3,
        tickcolor: tokens.rule2,
        fixedrange: true,
      },
      yaxis: {
        range: [0, top],
        tickvals: [line],
        showticklabels: false,
        gridcolor: tokens.rule,
        zeroline: false,
        fixedrange: true,
      },
      shapes:
        to > step
          ? [
              {
                type: "line",
                x0: step,
                x1: step,
                y0: 0,
                y1: 1,
                yref: "paper",
                layer: "below",
                line: { color: tokens.marker, width: 4 },
              },
            ]
          : [],
    };
    // Names at the curves' ends, kept apart; the small ones do without.
    const room = height - TOP - BOTTOM;
    const names = series.waves
      .map((k) => ({ k, amplitude: series.value("amplitude", to, k) || 0 }))
      .filter(({ k, amplitude }) => k === chosen || amplitude > 0.12 * top)
      .sort((p, q) => Number(q.k === chosen) - Number(p.k === chosen) || q.amplitude - p.amplitude);
    const placed: { k: number; y: number }[] = [];
    for (const { k, amplitude } of names) {
      const y = TOP + room * (1 - amplitude / top);
      if (placed.every((other) => Math.abs(other.y - y) >= 11)) placed.push({ k, y });
    }
    return { data: curves, layout: frame, labels: placed, line };
  }, [series, steps, step, from, to, theme, tokens, height, chosen]);
  return (
    <div
      style={{ position: "relative", width, height }}
      role="img"
      aria-label={`Amplitude of waves ${series.waves[0]} to ${series.waves.at(-1)} over the last ${DAYS} days`}
    >
      <PlotlyFigure data={data} layout={layout} width={width} height={height} />
      <span className="note line-name">
        line: {numberText(line, line < 10 ? 1 : 0)} {unitText(units)}
      </span>
      {labels.map(({ k, y }) => (
        <span
          key={k}
          className="curve-name"
          style={{ left: width - RIGHT + 4, top: y - 8, color: waveColour(k, theme) }}
        >
          k {k}
        </span>
      ))}
    </div>
  );
}
