import type { BackgroundSpec } from "../../../core/background/spec.ts";
import type { Correction, FieldDescription } from "../../../core/formats/dataset.ts";
import { nearestColumn, nearestRow } from "../../../core/grid/rows.ts";
import { westEast } from "../text/place-text.ts";
import type { Case, ChartChoice, Theme, WavesOf } from "./case.ts";

/** What a user can do to a case: each takes a case and gives the next one. */

function clamped(value: number, low: number, high: number): number {
  return Math.min(high, Math.max(low, value));
}

export function withTitle(kept: Case, title: string): Case {
  return { ...kept, title: title.trim() === "" ? "Untitled" : title.trim() };
}

/** Another field keeps level and band where it has them; settledCase sees to the rest. */
export function withField(kept: Case, key: string): Case {
  return { ...kept, field: key };
}

export function withLevel(kept: Case, level: number): Case {
  return { ...kept, level };
}

export function withMember(kept: Case, member: number): Case {
  return { ...kept, member };
}

/** Without a background there is no anomaly; with one, waves and shading are of the anomaly. */
export function withBackground(kept: Case, background: BackgroundSpec): Case {
  const had = kept.background.kind !== "none";
  const has = background.kind !== "none";
  if (had === has) return { ...kept, background };
  const of: WavesOf = has ? "anomaly" : "field";
  return { ...kept, background, waves: { ...kept.waves, of }, chart: { ...kept.chart, shading: of } };
}

/** The band, its southern end first; the cursor goes along if it was on the old one. */
export function withBand(kept: Case, ends: readonly [number, number]): Case {
  const band = [Math.min(...ends), Math.max(...ends)] as const;
  const middle = (band[0] + band[1]) / 2;
  const [south, north] = kept.waves.band;
  const wasThere = kept.cursor.lat >= south - 1e-6 && kept.cursor.lat <= north + 1e-6;
  const lat = wasThere || Math.sign(middle) !== Math.sign(kept.cursor.lat) ? middle : kept.cursor.lat;
  const hemisphere = middle === 0 ? kept.chart.hemisphere : middle < 0 ? "south" : "north";
  return {
    ...kept,
    waves: { ...kept.waves, band },
    cursor: { ...kept.cursor, lat },
    chart: { ...kept.chart, hemisphere },
  };
}

export function withWavesOf(kept: Case, of: WavesOf): Case {
  return kept.background.kind === "none" ? kept : { ...kept, waves: { ...kept.waves, of } };
}

export function withStep(kept: Case, step: number, steps: number): Case {
  return { ...kept, cursor: { ...kept.cursor, step: clamped(Math.round(step), 0, Math.max(0, steps - 1)) } };
}

/** The cursor on the grid point nearest to a place. */
export function withPlace(kept: Case, lat: number, lon: number, { grid }: FieldDescription): Case {
  const row = nearestRow(grid.lat, lat);
  const column = nearestColumn(grid.lon, lon);
  return { ...kept, cursor: { ...kept.cursor, lat: grid.lat[row], lon: westEast(grid.lon[column]) } };
}

/** The cursor some rows north and some columns east. A regional grid has ends, a circle has none. */
export function withMove(kept: Case, north: number, east: number, { grid }: FieldDescription): Case {
  const rows = grid.lat.length;
  const columns = grid.lon.length;
  const row = clamped(nearestRow(grid.lat, kept.cursor.lat) + north, 0, rows - 1);
  const moved = nearestColumn(grid.lon, kept.cursor.lon) + east;
  const column = grid.closesCircle ? ((moved % columns) + columns) % columns : clamped(moved, 0, columns - 1);
  return { ...kept, cursor: { ...kept.cursor, lat: grid.lat[row], lon: westEast(grid.lon[column]) } };
}

export function withChart(kept: Case, change: Partial<ChartChoice>): Case {
  return { ...kept, chart: { ...kept.chart, ...change } };
}

/** Turn the hemisphere chart, or cut the belt elsewhere, by some degrees east. */
export function withTurn(kept: Case, degrees: number): Case {
  return kept.chart.kind === "hemisphere"
    ? withChart(kept, { turn: westEast(kept.chart.turn + degrees) })
    : withChart(kept, { cut: westEast(kept.chart.cut + degrees) });
}

/** The cursor's meridian at the foot of the hemisphere chart, or in the middle of the belt. */
export function withTurnToCursor(kept: Case): Case {
  const { lon } = kept.cursor;
  return kept.chart.kind === "hemisphere"
    ? withChart(kept, { turn: lon })
    : withChart(kept, { cut: westEast(lon - 180) });
}

export function withTheme(kept: Case, theme: Theme): Case {
  return { ...kept, theme };
}

/** What the user says about a variable, in the place of what was said before. */
export function withCorrection(kept: Case, correction: Correction): Case {
  const others = kept.corrections.filter(
    ({ file, variable }) => file !== correction.file || variable !== correction.variable,
  );
  return { ...kept, corrections: [...others, correction] };
}
