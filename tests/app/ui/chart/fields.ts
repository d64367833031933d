import type { ChartGrid, ChartLayers } from "../../../../app/ui/chart/types.ts";

/** A global grid, both poles included. */
export function globalGrid(spacing: number, firstLon = 0): ChartGrid {
  return {
    lat: Float64Array.from({ length: Math.round(180 / spacing) + 1 }, (_, i) => -90 + spacing * i),
    lon: Float64Array.from({ length: Math.round(360 / spacing) }, (_, i) => firstLon + spacing * i),
    closesCircle: true,
  };
}

/** Values on a grid from a function of latitude and longitude, degrees. */
export function gridValues(grid: ChartGrid, value: (lat: number, lon: number) => number): Float32Array {
  return Float32Array.from({ length: grid.lat.length * grid.lon.length }, (_, i) =>
    value(grid.lat[Math.floor(i / grid.lon.length)] as number, grid.lon[i % grid.lon.length] as number),
  );
}

export const cosine = (degrees: number): number => Math.cos((degrees * Math.PI) / 180);
export const sine = (degrees: number): number => Math.sin((degrees * Math.PI) / 180);

/** Height and its departure: wave 3 and wave 1 about 52° on a mean that falls to the pole. */
export function waveLayers(grid: ChartGrid, changes: Partial<ChartLayers> = {}): ChartLayers {
  const wave = (lat: number, lon: number): number =>
    Math.exp(-(((Math.abs(lat) - 52) / 17) ** 2)) * (330 * cosine(3 * (lon + 14)) + 110 * cosine(lon - 9));
  const row = Float32Array.from(grid.lon, (lon) => wave(55, lon));
  return {
    grid,
    contours: {
      values: gridValues(grid, (lat, lon) => 5850 - 900 * sine(lat) ** 2 + wave(lat, lon)),
      interval: 60,
      boldEach: 4,
    },
    shading: { values: gridValues(grid, wave), step: 60, units: "gpm" },
    cursor: { lat: 55, lon: -17.5 },
    band: [55, 55],
    rim: { values: row, wave: { k: 3, amplitude: 320, ridge: -14 } },
    caption: ["Height and anomaly", "500 hPa, 9 Feb 2001", "00 UTC"],
    readout: ["55°N 17.5°W", "5 616 gpm", "anomaly +490"],
    maskWords: "no value in the file",
    ...changes,
  };
}

/** A text's width where there is no browser: about the type's own mean, 0.53 of its size. */
export function textWidth(text: string, font: string): number {
  return 0.53 * Number(/([\d.]+)px/.exec(font)?.[1]) * text.length;
}
