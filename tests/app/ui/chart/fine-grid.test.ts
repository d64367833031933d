import { describe, expect, test } from "vitest";
import { fineField } from "../../../../app/ui/chart/fine-grid.ts";
import type { ChartGrid } from "../../../../app/ui/chart/types.ts";
import { cosine, globalGrid, gridValues } from "./fields.ts";

type Fine = ReturnType<typeof fineField>;

function at(field: Fine, row: number, column: number): number {
  return field.values[row * field.nLon + column] as number;
}
function latOf(field: Fine, row: number): number {
  return field.lat0 + row * field.dLat;
}

describe("fineField", () => {
  test.each([
    ["north", 1],
    ["south", -1],
  ] as const)("%s: rows end at the pole, and the grid's own values are kept", (_, north) => {
    const grid = globalGrid(1.5, -180);
    const values = gridValues(grid, (lat, lon) => 100 * cosine(2 * lon) * cosine(lat) + lat);
    const field = fineField(grid, values, north);
    expect(latOf(field, north > 0 ? field.nLat - 1 : 0)).toBe(90 * north);
    expect(Math.abs(latOf(field, north > 0 ? 0 : field.nLat - 1))).toBeCloseTo(9, 9);
    const factor = Math.round(1.5 / field.dLon);
    let met = 0;
    for (let row = 0; row < field.nLat; row++) {
      const own = grid.lat.findIndex((lat) => Math.abs(lat - latOf(field, row)) < 1e-9);
      if (own < 0) continue;
      met += 1;
      for (let column = 0; column < grid.lon.length; column++)
        expect(at(field, row, column * factor), `${row}, ${column}`).toBe(values[own * grid.lon.length + column]);
    }
    expect(met).toBe(55); // 9°, 10.5°, … 90°
  });

  test("between its points it errs no more than a cubic may", () => {
    const grid = globalGrid(2.5);
    const k = 4;
    const field = fineField(
      grid,
      gridValues(grid, (_, lon) => cosine(k * lon)),
      1,
    );
    // Slopes by central differences err by f‴h²/6, which moves the cubic by at most 2 · (1/8)·h · h²f‴/6 at the middle, and the
    // cubic itself by f⁗h⁴/384; h = 2.5° · k in radians; float32 adds 2⁻²⁴.
    const h = (k * 2.5 * Math.PI) / 180;
    const limit = (2 * h ** 3) / 48 + h ** 4 / 384 + 2 ** -23;
    for (let column = 0; column < field.nLon; column++) {
      const expected = cosine(k * (field.lon0 + column * field.dLon));
      expect(Math.abs(at(field, 40, column) - expected), `column ${column}`).toBeLessThanOrEqual(limit);
    }
  });

  test("uneven rows: what is straight in latitude stays straight, and the pole they miss is filled with the last row's mean", () => {
    // Rows as Gaussian ones lie: not evenly, and short of the poles.
    const lat = Float64Array.from({ length: 64 }, (_, i) => {
      const even = -87.9 + (175.8 * i) / 63;
      return even + 0.05 * Math.sin(even);
    });
    const grid: ChartGrid = { ...globalGrid(3), lat };
    const field = fineField(
      grid,
      gridValues(grid, (y, lon) => 10 * y + cosine(lon)),
      1,
    );
    const last = lat[63] as number;
    for (let row = 0; row < field.nLat - 1; row++) {
      const here = latOf(field, row);
      if (here > (lat[62] as number)) continue; // the pole's own value enters the slopes of the last two spans
      // Column 0 is a column of the grid: nothing but float32 of up to 900, in three steps: 3 · 900 · 2⁻²⁴.
      expect(Math.abs(at(field, row, 0) - (10 * here + 1)), `row ${row}, ${here}°`).toBeLessThanOrEqual(1.7e-4);
    }
    // The mean of cos over the circle is 0; float32 of 900.
    for (const column of [0, 50, 200])
      expect(Math.abs(at(field, field.nLat - 1, column) - 10 * last)).toBeLessThanOrEqual(1.7e-4);
  });

  test("a missing value takes out its own cells and no more", () => {
    const grid = globalGrid(1.5);
    const values = gridValues(grid, (lat) => lat);
    const [row, column] = [100, 40]; // 60°N, 60°E
    values[row * grid.lon.length + column] = Number.NaN;
    const field = fineField(grid, values, 1);
    for (let r = 0; r < field.nLat; r++)
      for (let c = 0; c < field.nLon; c++) {
        const isNear =
          Math.abs(latOf(field, r) - 60) < 1.5 - 1e-9 && Math.abs(field.lon0 + c * field.dLon - 60) < 1.5 - 1e-9;
        const value = at(field, r, c);
        if (isNear) expect(Number.isNaN(value), `${r}, ${c}`).toBe(true);
        // A straight line where the cubic's neighbour is missing: the field is straight, so nothing changes.
        else expect(Math.abs(value - latOf(field, r)), `${r}, ${c}`).toBeLessThanOrEqual(90 * 2 ** -22);
      }
  });

  test("a regional grid is missing beyond itself, and its far pole is not invented", () => {
    const grid: ChartGrid = {
      lat: Float64Array.from({ length: 21 }, (_, i) => 30 + 1.5 * i),
      lon: Float64Array.from({ length: 41 }, (_, i) => 1.5 * i),
      closesCircle: false,
    };
    const field = fineField(
      grid,
      gridValues(grid, () => 5),
      1,
    );
    expect(field.nLon).toBe(81);
    for (let r = 0; r < field.nLat; r++)
      expect(Number.isNaN(at(field, r, 3)), `${latOf(field, r)}°`).toBe(latOf(field, r) < 30 || latOf(field, r) > 60);
    expect(fineField(grid, new Float32Array(21 * 41), -1).values.every(Number.isNaN)).toBe(true);
  });

  test("the input stays as it was", () => {
    const grid = globalGrid(5);
    const values = gridValues(grid, (lat, lon) => lat * lon);
    const before = values.slice();
    fineField(grid, values, 1);
    expect(values).toEqual(before);
  });
});
