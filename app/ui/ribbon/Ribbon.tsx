import { type GeoPermissibleObjects, geoEquirectangular, geoPath } from "d3-geo";
import type { Data, Layout } from "plotly.js";
import { type KeyboardEvent, type PointerEvent, useMemo } from "react";
import type { FieldDescription } from "../../../core/formats/dataset.ts";
import { LAND } from "../chart/coast.ts";
import { PlotlyFigure } from "../plots/PlotlyFigure.tsx";
import { departures } from "../reading/departures.ts";
import type { WaveSeries } from "../reading/wave-series.ts";
import type { RibbonOf } from "../session/use-numbers.ts";
import { longitudeText, westEast } from "../text/place-text.ts";
import { stepFlag, stepLine, stepTicks } from "../text/step-name.ts";
import { THEMES, type ThemeName, waveColour } from "../theme/tokens.ts";

interface RibbonProps {
  readonly ribbon: RibbonOf;
  readonly field: FieldDescription;
  readonly of: "anomaly" | "field";
  readonly shadingStep: number;
  readonly series: WaveSeries | null;
  readonly step: number;
  readonly lon: number;
  readonly theme: ThemeName;
  readonly width: number;
  readonly height: number;
  onStep(step: number): void;
}

const LEFT = 50;
const RIGHT = 24;
const LAND_STRIP = 22;
const TOP = LAND_STRIP + 20;
const BOTTOM = 12;
/** Steps of time by key, while the ribbon has the focus. */
const MOVES: Readonly<Record<string, number>> = {
  ArrowUp: -1,
  ArrowLeft: -1,
  ArrowDown: 1,
  ArrowRight: 1,
  PageUp: -10,
  PageDown: 10,
};

/** Longitude–time diagram of the band, and the control of time: a click or a pull goes to that day. */
export function Ribbon({
  ribbon,
  field,
  of,
  shadingStep,
  series,
  step,
  lon,
  theme,
  width,
  height,
  onStep,
}: RibbonProps) {
  const tokens = THEMES[theme];
  const { span, ribbon: numbers } = ribbon;
  const [from, to] = span;
  const n = to - from;
  // Between days there is weather; between the steps of a record that is no time there is nothing.
  const isDiscrete = field.steps.kind !== "time" || n < 3;
  const plotWidth = width - LEFT - RIGHT;
  const plotHeight = height - TOP - BOTTOM;
  const { data, layout } = useMemo(() => {
    const grid = field.grid;
    const nLon = grid.lon.length;
    // West to east from 180°W, and the first column again at 180°E where the circle closes.
    const order = Array.from({ length: nLon }, (_, i) => i).sort(
      (a, b) => westEast(grid.lon[a] as number) - westEast(grid.lon[b] as number),
    );
    const x = order.map((i) => westEast(grid.lon[i] as number));
    if (grid.closesCircle) {
      order.push(order[0] as number);
      x.push((x[0] as number) + 360);
    }
    const shaded = departures(numbers.values, of === "anomaly" ? numbers.background : null, nLon);
    const z = Array.from({ length: n }, (_, t) => order.map((i) => shaded[t * nLon + i]));
    const colours = [...tokens.below].reverse().concat(tokens.sheet, tokens.sheet, tokens.above);
    const bands = [...tokens.below].reverse().concat(tokens.sheet, tokens.above);
    const s = shadingStep;
    const trace = {
      type: isDiscrete ? "heatmap" : "contour",
      x,
      y: Array.from({ length: n }, (_, i) => i),
      z,
      showscale: false,
      hoverinfo: "skip",
      connectgaps: false,
      zmin: -7.5 * s,
      zmax: 7.5 * s,
      autocontour: false,
      zsmooth: false,
      contours: { start: -7 * s, end: 7 * s, size: s, coloring: "fill", showlines: false },
      line: { width: 0 },
      // Bands with sharp edges: a heat map needs each colour twice, a filled contour takes one per band.
      colorscale: isDiscrete
        ? bands.flatMap((colour, i) => [
            [i / bands.length, colour],
            [(i + 1) / bands.length, colour],
          ])
        : colours.map((colour, i) => [i / 15, colour]),
    } as unknown as Partial<Data>;
    const frame: Partial<Layout> = {
      margin: { l: 0, r: 0, t: 0, b: 0 },
      paper_bgcolor: "rgba(0,0,0,0)",
      plot_bgcolor: "rgba(0,0,0,0)",
      xaxis: { visible: false, range: [-180, 180], fixedrange: true },
      yaxis: { visible: false, range: isDiscrete ? [n - 0.5, -0.5] : [n - 1, 0], fixedrange: true },
    };
    return { data: [trace], layout: frame };
  }, [field, numbers, n, isDiscrete, of, shadingStep, tokens]);
  const land = useMemo(() => {
    const projection = geoEquirectangular()
      .scale(plotWidth / (2 * Math.PI))
      .translate([plotWidth / 2, LAND_STRIP * 1.35])
      .clipExtent([
        [0, 0],
        [plotWidth, LAND_STRIP],
      ]);
    return geoPath(projection)(LAND.coarse as unknown as GeoPermissibleObjects) ?? "";
  }, [plotWidth]);
  /** Height of a step, and where the first step stands. */
  const perStep = plotHeight / (isDiscrete ? n : n - 1);
  const start = TOP + (isDiscrete ? perStep / 2 : 0);
  const yOf = (index: number): number => start + (index - from) * perStep;
  const xOf = (degrees: number): number => LEFT + ((westEast(degrees) + 180) / 360) * plotWidth;
  const follow = (event: PointerEvent<HTMLDivElement>): void => {
    const box = event.currentTarget.getBoundingClientRect();
    const index = from + Math.round((event.clientY - box.top - start) / perStep);
    onStep(Math.min(to - 1, Math.max(from, index)));
  };
  const ticks = stepTicks(field.steps, from, to, 12);
  const here = yOf(step);
  const press = (event: KeyboardEvent<HTMLDivElement>): void => {
    const move = MOVES[event.key];
    if (move === undefined || event.ctrlKey || event.metaKey || event.altKey) return;
    // The window's own arrow keys move the cursor over the map; here they go through time.
    event.preventDefault();
    event.stopPropagation();
    onStep(step + move);
  };
  const flag = stepFlag(field.steps, step);
  const leaders = useMemo(() => {
    if (series === null) return [];
    const runs: { k: number; from: number; to: number }[] = [];
    for (let i = from; i < to; i++) {
      const k = series.leader(i);
      const last = runs.at(-1);
      if (k === null) continue;
      if (last !== undefined && last.k === k && last.to === i) last.to = i + 1;
      else runs.push({ k, from: i, to: i + 1 });
    }
    return runs;
  }, [series, from, to]);
  const half = perStep / 2;
  const clip = (y: number): number => Math.min(TOP + plotHeight, Math.max(TOP, y));
  const [under, over] = theme === "light" ? [tokens.marker, tokens.ink] : [tokens.sheet, tokens.marker];
  return (
    <div
      className="ribbon"
      style={{ width, height }}
      role="slider"
      tabIndex={0}
      aria-label="Time"
      aria-valuemin={from}
      aria-valuemax={to - 1}
      aria-valuenow={step}
      aria-valuetext={stepLine(field.steps, step)}
      data-testid="ribbon"
      data-top={TOP}
      data-height={plotHeight}
      onKeyDown={press}
      onPointerDown={(event) => {
        event.currentTarget.setPointerCapture(event.pointerId);
        follow(event);
      }}
      onPointerMove={(event) => {
        if (event.buttons === 1) follow(event);
      }}
    >
      <div style={{ position: "absolute", left: LEFT, top: TOP }}>
        <PlotlyFigure data={data} layout={layout} width={plotWidth} height={plotHeight} />
      </div>
      <svg width={width} height={height} aria-hidden="true">
        <rect width={width} height={height} fill="transparent" />
        <path d={land} transform={`translate(${LEFT} 0)`} fill={tokens.zone} stroke={tokens.coast} strokeWidth={0.5} />
        {(plotWidth < 220 ? [-90, 0, 90] : [-120, -60, 0, 60, 120]).map((degrees) => (
          <g key={degrees}>
            <text x={xOf(degrees)} y={TOP - 6} textAnchor="middle" fontSize={11.5} fill={tokens.ink2}>
              {longitudeText(degrees)}
            </text>
            <line
              x1={xOf(degrees)}
              x2={xOf(degrees)}
              y1={TOP}
              y2={TOP + plotHeight}
              stroke={tokens.graticule}
              strokeWidth={0.7}
            />
          </g>
        ))}
        <rect x={LEFT} y={TOP} width={plotWidth} height={plotHeight} fill="none" stroke={tokens.ink} />
        {ticks.map(({ index, text, isMain }) => (
          <g key={index}>
            <line x1={LEFT - (isMain ? 7 : 4)} x2={LEFT} y1={yOf(index)} y2={yOf(index)} stroke={tokens.rule2} />
            {Math.abs(yOf(index) - here) > 15 && (
              <text
                x={LEFT - 10}
                y={yOf(index) + 4}
                textAnchor="end"
                fontSize={11.5}
                fontWeight={isMain ? 640 : 400}
                fill={isMain ? tokens.ink : tokens.ink2}
              >
                {text}
              </text>
            )}
          </g>
        ))}
        <text x={width - RIGHT + 10} y={TOP - 6} textAnchor="middle" fontSize={11.5} fill={tokens.ink2}>
          k
        </text>
        {leaders.map((run) => {
          const top = clip(yOf(run.from) - half);
          const bottom = clip(yOf(run.to - 1) + half);
          return (
            <g key={run.from}>
              <rect
                x={width - RIGHT + 5}
                y={top}
                width={6}
                height={Math.max(0.5, bottom - top)}
                fill={waveColour(run.k, theme)}
              />
              {bottom - top > 12 && (
                <text x={width - 3} y={(top + bottom) / 2 + 4} textAnchor="end" fontSize={11.5} fill={tokens.ink2}>
                  {run.k}
                </text>
              )}
            </g>
          );
        })}
        <line x1={xOf(lon)} x2={xOf(lon)} y1={TOP} y2={TOP + plotHeight} stroke={under} strokeWidth={3} />
        <line x1={xOf(lon)} x2={xOf(lon)} y1={TOP} y2={TOP + plotHeight} stroke={over} strokeWidth={1} />
        <line x1={LEFT} x2={width - RIGHT + 2} y1={here} y2={here} stroke={under} strokeWidth={4.5} />
        <line x1={LEFT} x2={width - RIGHT + 2} y1={here} y2={here} stroke={over} strokeWidth={1.4} />
        <path
          d={`M0 ${here - 10}H${LEFT - 8}L${LEFT - 1} ${here}L${LEFT - 8} ${here + 10}H0Z`}
          fill={tokens.marker}
          stroke={tokens.onMarker}
          strokeWidth={0.8}
        />
        <text
          x={(LEFT - 8) / 2}
          y={here + 4}
          textAnchor="middle"
          fontSize={flag.length > 6 ? 10.5 : 12}
          fontWeight={620}
          fill={tokens.onMarker}
        >
          {flag}
        </text>
      </svg>
    </div>
  );
}
