import type { Coordinate, ResultVariable, Series } from "../entry.ts";

/** Dims of a map; a field without levels has no `level`. */
export const MAP = ["level", "latitude", "longitude"];

/** Coordinates of the maps of a series. */
export function mapCoordinates(series: Series): Coordinate[] {
  const level: Coordinate[] =
    series.levels === null
      ? []
      : [
          {
            name: "level",
            values: series.levels,
            units: "hPa",
            attributes: { standard_name: "air_pressure", positive: "down" },
          },
        ];
  return [
    ...level,
    {
      name: "latitude",
      values: series.grid.lat.slice(),
      units: "degrees_north",
      attributes: { standard_name: "latitude" },
    },
    {
      name: "longitude",
      values: series.grid.lon.slice(),
      units: "degrees_east",
      attributes: { standard_name: "longitude" },
    },
  ];
}

/** `MAP` on this series. */
function mapDims(series: Series): string[] {
  return MAP.filter((dim) => dim !== "level" || series.levels !== null);
}

function mapShape(series: Series): number[] {
  return [...(series.levels === null ? [] : [series.levels.length]), series.grid.lat.length, series.grid.lon.length];
}

/** What a variable of maps is called. */
export interface MapTitle {
  readonly name: string;
  readonly title: string;
  readonly units: string;
  /** A dimension before those of the map, and its size. */
  readonly lead?: readonly [dim: string, size: number];
}

/**
 * A variable of maps.
 *
 * @param reasons Reason code of each number, or of each cell of the map for every `lead`; null = all valid.
 */
export function mapVariable(
  series: Series,
  { name, title, units, lead }: MapTitle,
  data: ResultVariable["data"],
  reasons: Uint8Array | null,
): ResultVariable {
  const dims = [...(lead === undefined ? [] : [lead[0]]), ...mapDims(series)];
  const shape = [...(lead === undefined ? [] : [lead[1]]), ...mapShape(series)];
  const plain = { name, title, units, dims, shape, data };
  if (!(reasons?.some((code) => code !== 0) ?? false) || reasons === null) return plain;
  if (reasons.length === data.length) return { ...plain, reasons };
  const each = new Uint8Array(data.length);
  for (let at = 0; at < each.length; at += reasons.length) each.set(reasons, at);
  return { ...plain, reasons: each };
}
