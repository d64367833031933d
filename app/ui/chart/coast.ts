import type { MultiPolygon, Polygon } from "geojson";
import { feature, mesh } from "topojson-client";
import type { GeometryCollection, Topology } from "topojson-specification";
import land50 from "world-atlas/land-50m.json";
import land110 from "world-atlas/land-110m.json";

// Natural Earth, public domain, as world-atlas packs it.
type Land = Topology<{ land: GeometryCollection }>;

/** Land and its edge, for the sheet's scale: the coarser one for small drawings. */
export const LAND = {
  coarse: feature(land110 as unknown as Land, "land") as unknown as {
    type: "FeatureCollection";
    features: { geometry: Polygon | MultiPolygon }[];
  },
  fine: feature(land50 as unknown as Land, "land") as unknown as {
    type: "FeatureCollection";
    features: { geometry: Polygon | MultiPolygon }[];
  },
};
export const COAST = {
  coarse: mesh(land110 as unknown as Land),
  fine: mesh(land50 as unknown as Land),
};
