import { describe, expect, test } from "vitest";
import { chartLayout } from "../../../../app/ui/chart/chart-layout.ts";
import { fineField } from "../../../../app/ui/chart/fine-grid.ts";
import { pixelTable, shadedPixels, valueAt } from "../../../../app/ui/chart/pixel-table.ts";
import { bandRings, missingPlaces, missingRings, sampledPlane } from "../../../../app/ui/chart/plane-rings.ts";
import type { ChartView } from "../../../../app/ui/chart/types.ts";
import { rampColour } from "../../../../app/ui/theme/tokens.ts";
import { globalGrid, gridValues } from "./fields.ts";

const NORTH: ChartView = { kind: "hemisphere", hemisphere: "north", turn: 40, cut: -180 };
const SOUTH: ChartView = { kind: "hemisphere", hemisphere: "south", turn: -100, cut: -180 };
const BELT: ChartView = { kind: "belt", hemisphere: "north", turn: 0, cut: 65 };
const GRID = globalGrid(1.5, -180);

describe.each([NORTH, SOUTH, BELT])("pixel table, $kind $hemisphere", (view) => {
  const { map } = chartLayout(view, 480, 470);
  const field = fineField(GRID, new Float32Array(GRID.lat.length * GRID.lon.length), map.north);
  const table = pixelTable(map, field, 2);

  test("each pixel lies where d3-geo's inverse puts it", () => {
    const stride = 997; // a prime, so that all columns are met
    let met = 0;
    for (let n = 0; n < table.pixel.length; n += stride) {
      const pixel = table.pixel[n] as number;
      const x = (table.x0 + (pixel % table.width) + 0.5) / 2;
      const y = (table.y0 + Math.floor(pixel / table.width) + 0.5) / 2;
      const place =
        view.kind === "belt"
          ? map.lonLat(x, y)
          : Math.hypot(x - map.cx, y - map.cy) < map.radius - 1
            ? (map.projection.invert?.([x, y]) as [number, number])
            : null;
      if (place === null) continue;
      met += 1;
      const lon = map.firstLon + (table.east[n] as number) * field.dLon;
      const lat = field.lat0 + ((table.row[n] as number) / field.nLon + (table.dy[n] as number)) * field.dLat;
      // float32 of a column under 480 and of a share under 1: 480 · 2⁻²⁴ · 0.75° = 2.2e-5.
      expect(Math.abs(lat - place[1]), `pixel ${x}, ${y}`).toBeLessThanOrEqual(3e-5);
      const apart = ((((lon - place[0] + 180) % 360) + 360) % 360) - 180;
      expect(Math.abs(apart), `pixel ${x}, ${y}: ${lon} and ${place[0]}`).toBeLessThanOrEqual(3e-5);
    }
    expect(met).toBeGreaterThan(200);
  });

  test("it covers the map, and is the same however the chart is turned", () => {
    const share = table.pixel.length / (table.width * table.height);
    // The disc is π/4 of its square; a pixel more all round.
    const expected = view.kind === "belt" ? 1 : Math.PI / 4;
    expect(share).toBeGreaterThanOrEqual(expected - 0.005);
    const turned = pixelTable(chartLayout({ ...view, turn: 3, cut: 12 }, 480, 470).map, field, 2);
    expect(turned.east).toEqual(table.east);
    expect(turned.row).toEqual(table.row);
  });
});

describe("shadedPixels", () => {
  const { map } = chartLayout(NORTH, 480, 470);

  function shaded(value: (lat: number, lon: number) => number, step: number) {
    const field = fineField(GRID, gridValues(GRID, value), 1);
    const table = pixelTable(map, field, 1);
    const words = new Uint32Array(table.width * table.height);
    const isMasked = shadedPixels(table, field, map.firstLon, step, "light", words);
    const bytes = new Uint8Array(words.buffer);
    const colourAt = (lon: number, lat: number): string | null => {
      const [x, y] = map.xy(lon, lat);
      const at = 4 * ((Math.floor(y) - table.y0) * table.width + Math.floor(x) - table.x0);
      if (bytes[at + 3] === 0) return null;
      return `#${[0, 1, 2].map((i) => (bytes[at + i] as number).toString(16).padStart(2, "0")).join("")}`.toUpperCase();
    };
    return { isMasked, colourAt, field, table };
  }

  test("each place has the colour of its band", () => {
    // A departure that depends on longitude alone: 100 at 40°E, −100 at 140°W.
    const value = (_: number, lon: number): number => 100 * Math.cos(((lon - 40) * Math.PI) / 180);
    const { colourAt, isMasked } = shaded(value, 12);
    expect(isMasked).toBe(false);
    for (let lon = -177; lon < 180; lon += 11) {
      const here = value(0, lon);
      // A pixel is 1/3° wide here: nearer than 0.6 to a band's edge it may lie beyond it.
      if (Math.abs(here / 12 - Math.round(here / 12)) < 0.1) continue;
      expect(colourAt(lon, 50), `${lon}°: ${here}`).toBe(rampColour(here, 12, "light"));
    }
  });

  test("what is missing stays clear, and is told", () => {
    const { colourAt, isMasked } = shaded((lat, lon) => (lat > 60 && lon > 0 ? Number.NaN : 30), 20);
    expect(isMasked).toBe(true);
    expect(colourAt(90, 75)).toBeNull();
    expect(colourAt(-90, 75)).toBe(rampColour(30, 20, "light"));
  });

  test("the loop and valueAt() say the same", () => {
    const { field, table } = shaded((lat, lon) => lat * Math.cos((3 * lon * Math.PI) / 180), 1);
    const words = new Uint32Array(table.width * table.height);
    shadedPixels(table, field, map.firstLon, 7, "night", words);
    const bytes = new Uint8Array(words.buffer);
    const shift = (map.firstLon - field.lon0) / field.dLon;
    for (let n = 0; n < table.pixel.length; n += 313) {
      const row = (table.row[n] as number) / field.nLon;
      const value = valueAt(field, row, table.dy[n] as number, (table.east[n] as number) + shift);
      // The two round apart by some 90 · 2⁻²³.
      if (Math.abs(value / 7 - Math.round(value / 7)) < 1e-5) continue;
      const at = 4 * (table.pixel[n] as number);
      const colour = `#${[0, 1, 2].map((i) => (bytes[at + i] as number).toString(16).padStart(2, "0")).join("")}`;
      expect(colour.toUpperCase(), `${value}`).toBe(rampColour(value, 7, "night"));
    }
  });
});

describe("areas for vector drawings", () => {
  const { map } = chartLayout(NORTH, 480, 470);

  test("a cap's bands are rings at the radius of their latitude", () => {
    const field = fineField(
      GRID,
      gridValues(GRID, (lat) => 10 * (lat - 60)),
      1,
    );
    const bands = bandRings(sampledPlane(map, field, 2), 50);
    expect(bands.map(({ band }) => band).sort((a, b) => a - b)).toEqual([-7, -6, -5, -4, -3, -2, -1, 1, 2, 3, 4, 5]);
    for (const { band, rings } of bands) {
      const lat = 60 + 5 * band;
      const radius = map.cy - map.xy(map.firstLon + 180, lat)[1];
      let farthest = 0;
      for (const ring of rings)
        for (let i = 0; i < ring.length; i += 2) {
          const r = Math.hypot((ring[i] as number) - map.cx, (ring[i + 1] as number) - map.cy);
          // Below zero the area is all outside the circle: the samples' edge is the other ring.
          if (Math.abs(r - radius) > 3) {
            expect(band).toBeLessThan(0);
            continue;
          }
          farthest = Math.max(farthest, Math.abs(r - radius));
        }
      // Straight interpolation over 2 px: a circle of radius r errs by 2²/(8r), 0.04 px at the smallest; the radial curve of
      // the projection is flatter than that.
      expect(farthest, `band ${band}`).toBeLessThanOrEqual(0.08);
      expect(rings.length).toBeGreaterThan(0);
    }
  });

  test("what is missing is one ring about its place, with words' places inside it", () => {
    const isOut = (lat: number, lon: number): boolean => Math.abs(lat - 50) < 8 && Math.abs(lon - 20) < 20;
    const field = fineField(
      GRID,
      gridValues(GRID, (lat, lon) => (isOut(lat, lon) ? Number.NaN : 1)),
      1,
    );
    const plane = sampledPlane(map, field, 3);
    const [x, y] = map.xy(20, 50);
    const around = missingRings(plane).filter(
      (ring) => Math.hypot((ring[0] as number) - x, (ring[1] as number) - y) < 90,
    );
    expect(around).toHaveLength(1);
    const places = missingPlaces(map, plane);
    expect(places.length).toBeGreaterThan(5);
    for (const place of places) {
      const [lon, lat] = map.lonLat(place.x, place.y) as readonly [number, number];
      expect(Math.abs(lat - 50)).toBeLessThanOrEqual(9.5);
      expect(Math.abs(lon - 20)).toBeLessThanOrEqual(21.5);
    }
    expect(Math.hypot((places[0]?.x as number) - x, (places[0]?.y as number) - y)).toBeLessThanOrEqual(14);
  });
});
