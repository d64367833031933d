import { expect, test } from "vitest";
import { extrema } from "../../../../app/ui/chart/extrema.ts";
import { cosine, globalGrid, gridValues } from "./fields.ts";

const GRID = globalGrid(2.5);

/** A hill of the given height about a place, some 8° wide. */
function hill(lat: number, lon: number, height: number) {
  return (y: number, x: number): number => {
    const east = ((((x - lon + 180) % 360) + 360) % 360) - 180;
    return height * Math.exp(-(((y - lat) / 8) ** 2) - ((east * cosine(lat)) / 8) ** 2);
  };
}

test("hills and hollows are found with their signed values, largest first, over the seam too", () => {
  const parts = [hill(50, 0, 300), hill(60, 120, -420), hill(40, -110, 150), hill(55, -60, 40)];
  const values = gridValues(GRID, (lat, lon) => parts.reduce((sum, part) => sum + part(lat, lon), 0));
  const found = extrema(GRID, values, 120, 1, 8);
  expect(found.map(({ lat, lon, value }) => [lat, lon, Math.round(value)])).toEqual([
    [60, 120, -420],
    [50, 0, 300],
    [40, 250, 150],
  ]);
});

test("of two close by only the larger counts; there are no more than asked; the other hemisphere stays out", () => {
  const parts = [hill(50, 20, 300), hill(52.5, 30, 299), hill(-50, 90, 500), hill(45, 180, -200)];
  const values = gridValues(
    GRID,
    (lat, lon) => Math.max(...parts.slice(0, 3).map((p) => p(lat, lon))) + parts[3]!(lat, lon),
  );
  expect(extrema(GRID, values, 100, 1, 8).map(({ lon }) => lon)).toEqual([20, 180]);
  expect(extrema(GRID, values, 100, 1, 1).map(({ lon }) => lon)).toEqual([20]);
  expect(extrema(GRID, values, 100, -1, 8).map(({ lat }) => lat)).toEqual([-50]);
});

test("missing values are no extremes and do not hide one two cells away", () => {
  const values = gridValues(GRID, hill(50, 20, 300));
  const row = GRID.lat.indexOf(50);
  values[row * GRID.lon.length + 20] = Number.NaN; // 50°E
  expect(extrema(GRID, values, 100, 1, 8)).toHaveLength(1);
  expect(extrema(GRID, values.fill(Number.NaN), 100, 1, 8)).toEqual([]);
});
