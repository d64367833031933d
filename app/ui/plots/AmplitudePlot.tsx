import type { Data, Layout } from "plotly.js";
import { useMemo } from "react";
import type { StepAxis } from "../../../core/field/axes.ts";
import type { WaveSeries } from "../reading/wave-series.ts";
import { numberText, unitText } from "../text/number-text.ts";
import { stepTicks } from "../text/step-name.ts";
import { niceStep } from "../theme/nice-step.ts";
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

/** Amplitude of each wave over the last twenty days (steps, on a record that is not a time). */
export function AmplitudePlot({ series, steps, step, units, theme, width, height, chosen }: AmplitudePlotProps) {
  const tokens = THEMES[theme];
  const from = useMemo(() => {
    let first = step;
    const isTime = steps.kind === "time";
    while (
      first > series.span[0] &&
      (isTime
        ? (steps.values[step] as number) - (steps.values[first - 1] as number) <= DAYS + 1e-6
        : step - first < DAYS)
    )
      first -= 1;
    return first;
  }, [series, steps, step]);
  const { data, layout, labels } = useMemo(() => {
    const indices = Array.from({ length: step - from + 1 }, (_, i) => from + i);
    let most = 0;
    for (const k of series.waves) for (const i of indices) most = Math.max(most, series.value("amplitude", i, k) || 0);
    const top = niceStep(most * 1.02);
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
    const ticks = stepTicks(steps, from, step + 1, 5);
    const frame: Partial<Layout> = {
      margin: { l: 6, r: RIGHT, t: 16, b: 19 },
      paper_bgcolor: "rgba(0,0,0,0)",
      plot_bgcolor: "rgba(0,0,0,0)",
      showlegend: false,
      font: { family: FONT, size: 11.5, color: tokens.ink2 },
      xaxis: {
        range: [from, Math.max(step, from + 1)],
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
        tickvals: [top / 2, top],
        showticklabels: false,
        gridcolor: tokens.rule,
        zeroline: false,
        fixedrange: true,
      },
      annotations: [
        {
          x: 1,
          xref: "paper",
          y: top,
          yref: "y",
          xanchor: "right",
          yanchor: "bottom",
          showarrow: false,
          text: `${numberText(top)} ${unitText(units)}`,
          font: { size: 11.5, color: tokens.ink2 },
        },
      ],
    };
    // Names of the three largest today, kept apart.
    const room = height - 35;
    const names = series.waves
      .map((k) => ({ k, y: 16 + room * (1 - (series.value("amplitude", step, k) || 0) / top) }))
      .filter(({ k }) => series.value("amplitude", step, k) > 0.12 * top)
      .sort((a, b) => a.y - b.y);
    let last = Number.NEGATIVE_INFINITY;
    const placed = names.flatMap((name) => {
      if (name.y - last < 11) return [];
      last = name.y;
      return [name];
    });
    return { data: curves, layout: frame, labels: placed };
  }, [series, steps, step, from, units, theme, tokens, height, chosen]);
  return (
    <div
      style={{ position: "relative", width, height }}
      role="img"
      aria-label={`Amplitude of waves ${series.waves[0]} to ${series.waves.at(-1)} over the last ${DAYS} days`}
    >
      <PlotlyFigure data={data} layout={layout} width={width} height={height} />
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
