import { describe, expect, test } from "vitest";
import { chartLayout } from "../../../../app/ui/chart/chart-layout.ts";
import { BELT_LATITUDES, RIM_LATITUDE } from "../../../../app/ui/chart/chart-map.ts";
import type { ChartView } from "../../../../app/ui/chart/types.ts";

const VIEWS: readonly ChartView[] = [
  { kind: "hemisphere", hemisphere: "north", turn: 0, cut: -180 },
  { kind: "hemisphere", hemisphere: "north", turn: 130, cut: -180 },
  { kind: "hemisphere", hemisphere: "south", turn: -75, cut: -180 },
  { kind: "belt", hemisphere: "north", turn: 0, cut: -180 },
  { kind: "belt", hemisphere: "north", turn: 0, cut: 37 },
  { kind: "belt", hemisphere: "south", turn: 0, cut: -60 },
];

describe.each(VIEWS)("%j", (view) => {
  const { map } = chartLayout(view, 580, 530);
  const north = view.hemisphere === "north" ? 1 : -1;
  const places: [number, number][] = [];
  for (let lat = 22; lat <= 82; lat += 6.3)
    for (let lon = -179; lon < 180; lon += 13.7) places.push([lon, north * lat]);

  test("places lie where d3-geo's own projection puts them", () => {
    for (const [lon, lat] of places) {
      const [x, y] = map.xy(lon, lat);
      const [u, v] = map.projection([lon, lat]) as [number, number];
      // Two ways through sines and cosines of a drawing under 1000 px: 1e-9 px is far above 1000 · 2⁻⁵² · 10.
      expect(Math.hypot(x - u, y - v), `${lon}, ${lat}: ${x}, ${y} and ${u}, ${v}`).toBeLessThanOrEqual(1e-9);
    }
  });

  test("the way back agrees with d3-geo's inverse, and with itself", () => {
    for (const [lon, lat] of places) {
      const [x, y] = map.xy(lon, lat);
      const back = map.lonLat(x, y);
      const [east, backLat] = map.beyond(x, y);
      // d3-geo makes no inverse of a projection of one's own, as the belt's is.
      const [u, v] = (view.kind === "belt" ? null : map.projection.invert?.([x, y])) ?? [lon, lat];
      expect(back).not.toBeNull();
      for (const [a, b] of [
        [back?.[0], lon],
        [back?.[0], u],
        [map.firstLon + east, lon],
      ] as [number, number][]) {
        const apart = ((((a - b + 180) % 360) + 360) % 360) - 180;
        expect(Math.abs(apart), `${a} and ${b}`).toBeLessThanOrEqual(1e-9);
      }
      for (const other of [lat, v, backLat]) expect(Math.abs((back?.[1] as number) - other)).toBeLessThanOrEqual(1e-9);
    }
  });

  test("off the map there is no place", () => {
    expect(map.lonLat(1, 1)).toBeNull();
    expect(map.lonLat(map.box.x - 1, map.cy)).toBeNull();
  });
});

test("the hemisphere chart keeps areas: rings of equal area on the sphere are so on the drawing", () => {
  const { map } = chartLayout(VIEWS[0] as ChartView, 580, 530);
  const area = (south: number, top: number): number => {
    const r = (lat: number): number => Math.hypot(map.xy(0, lat)[0] - map.cx, map.xy(0, lat)[1] - map.cy);
    // Area on the sphere goes as sin φ(north) − sin φ(south) (Archimedes).
    const sphere = Math.sin((top * Math.PI) / 180) - Math.sin((south * Math.PI) / 180);
    return (r(south) ** 2 - r(top) ** 2) / sphere;
  };
  expect(area(20, 30) / area(70, 90)).toBeCloseTo(1, 12);
});

describe("layout", () => {
  const sizes = [
    [580, 530],
    [492, 480],
    [470, 470],
    [400, 360],
    [900, 500],
    [420, 700],
    [1200, 900],
  ] as const;

  test.each(sizes)(
    "hemisphere, %d × %d: all within the drawing, clear of the texts in the corners",
    (width, height) => {
      const { map } = chartLayout(VIEWS[0] as ChartView, width, height);
      // Edge of the disc, then frame, curve and its triangles.
      const round = map.radius + 38;
      expect(map.cx - round).toBeGreaterThanOrEqual(0);
      expect(map.cy - round).toBeGreaterThanOrEqual(0);
      expect(map.cy + round).toBeLessThanOrEqual(height);
      // Caption (its three lines end 46 px down) and readout.
      expect(Math.hypot(map.cx - 126, map.cy - 46)).toBeGreaterThanOrEqual(round);
      expect(Math.hypot(width - 108 - map.cx, map.cy - 46)).toBeGreaterThanOrEqual(round);
      expect(map.radius).toBeGreaterThanOrEqual(100);
    },
  );

  test.each(sizes)("belt, %d × %d: map, strip and keys one below the other", (width, height) => {
    const { map, strip, foot } = chartLayout(VIEWS[3] as ChartView, width, height);
    expect(strip).not.toBeNull();
    const stripBox = strip as NonNullable<typeof strip>;
    expect(stripBox.y).toBeGreaterThanOrEqual(map.box.y + map.box.height + 35);
    expect(foot).toBeLessThanOrEqual(height);
    expect(foot - stripBox.y - stripBox.height).toBeGreaterThanOrEqual(30);
    expect(stripBox.height).toBeGreaterThanOrEqual(20);
    expect(map.box.x + map.box.width).toBeLessThanOrEqual(width);
    expect([stripBox.x, stripBox.width]).toEqual([map.box.x, map.box.width]);
  });

  test("the maps end at the latitudes they say", () => {
    const disc = chartLayout(VIEWS[2] as ChartView, 580, 530).map;
    expect(Math.hypot(disc.xy(10, -RIM_LATITUDE)[0] - disc.cx, disc.xy(10, -RIM_LATITUDE)[1] - disc.cy)).toBeCloseTo(
      disc.radius,
      9,
    );
    const belt = chartLayout(VIEWS[5] as ChartView, 580, 530).map;
    expect(belt.xy(0, -BELT_LATITUDES[0])[1]).toBeCloseTo(belt.box.y, 9);
    expect(belt.xy(0, -BELT_LATITUDES[1])[1]).toBeCloseTo(belt.box.y + belt.box.height, 9);
  });
});
