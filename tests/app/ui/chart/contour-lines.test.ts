import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { type ContourLine, contourLines, type EvenField } from "../../../../app/ui/chart/contour-lines.ts";

/** A plane of samples `h` apart, its middle at the origin. */
function plane(size: number, h: number, value: (x: number, y: number) => number): EvenField {
  const start = (-h * (size - 1)) / 2;
  const values = Float32Array.from({ length: size * size }, (_, i) =>
    value(start + h * (i % size), start + h * Math.floor(i / size)),
  );
  return { values, nLat: size, nLon: size, lat0: start, dLat: h, lon0: start, dLon: h, closesCircle: false };
}

function points({ points: flat }: ContourLine): [x: number, y: number][] {
  return Array.from({ length: flat.length / 2 }, (_, i) => [flat[2 * i] as number, flat[2 * i + 1] as number]);
}

describe("on a plane", () => {
  test("x² + y² gives one closed circle per level, as near as straight interpolation allows", () => {
    const h = 0.5;
    const lines = contourLines(
      plane(41, h, (x, y) => x * x + y * y),
      20,
      1,
      4,
    );
    expect(lines.map(({ level }) => level)).toEqual([20, 40, 60, 80]);
    for (const line of lines) {
      expect(line.isClosed).toBe(true);
      // On an edge x²+y² is a parabola with second derivative 2: straight interpolation errs by at most 2h²/8. Its values are
      // multiples of 1/4 up to 200, exact in float32.
      for (const [x, y] of points(line))
        expect(Math.abs(x * x + y * y - line.level), `${x}, ${y}`).toBeLessThanOrEqual((h * h) / 4 + 1e-12);
    }
  });

  test("the rings of a closed level enclose the area of the circle", () => {
    const [line] = contourLines(
      plane(81, 0.25, (x, y) => x * x + y * y),
      49,
      1,
      1,
    );
    let twice = 0;
    const ring = points(line as ContourLine);
    for (let i = 1; i < ring.length; i++) {
      const [[x0, y0], [x1, y1]] = [ring[i - 1] as [number, number], ring[i] as [number, number]];
      twice += x0 * y1 - x1 * y0;
    }
    // Radius 7, wrong by at most (h²/4)/(2r) = 0.0011 and by the chords' sagitta h²·2/(8r) = 0.0022: 2πr · 0.0034 in area.
    expect(Math.abs(Math.abs(twice) / 2 - 49 * Math.PI)).toBeLessThanOrEqual(2 * Math.PI * 7 * 0.0034);
  });

  test("a saddle keeps what its mean says together: x·y splits by the sign of the level", () => {
    // One cell with its high corners on one diagonal; mean 0.
    const cell = (level: number): number[] => {
      const field: EvenField = {
        values: Float32Array.of(1, -1, -1, 1),
        nLat: 2,
        nLon: 2,
        lat0: 0,
        dLat: 1,
        lon0: 0,
        dLon: 1,
        closesCircle: false,
      };
      const lines = contourLines(field, Math.abs(level), Math.sign(level), Math.sign(level));
      expect(lines).toHaveLength(2);
      // Sum of the ends' coordinates: under 1 the line cuts the south-west corner off.
      return lines.map((line) => points(line).reduce((sum, [x, y]) => sum + (x + y) / 2, 0)).sort((a, b) => a - b);
    };
    // Level under the mean: the middle is high, and the lines cut off the low corners, south-east and north-west.
    for (const sum of cell(-0.5)) expect(sum).toBeCloseTo(1, 12);
    // Level over the mean: the lines cut off the high corners. Their ends lie 1/4 from the corner on each side.
    const [southWest, northEast] = cell(0.5) as [number, number];
    expect(southWest).toBeCloseTo(0.25, 12);
    expect(northEast).toBeCloseTo(1.75, 12);
  });

  test("a missing corner takes its cells out, no more", () => {
    const field = plane(21, 1, (x) => x + 0.25);
    const whole = contourLines(field, 1, 0, 0)[0] as ContourLine;
    expect(whole.points.length / 2).toBe(21);
    field.values[10 * 21 + 9] = Number.NaN;
    const parts = contourLines(field, 1, 0, 0);
    expect(parts.map((line) => line.points.length / 2).sort((a, b) => a - b)).toEqual([10, 10]);
  });

  test("every line is closed, or ends at the edge of the plane", () => {
    fc.assert(
      fc.property(
        fc.array(fc.integer({ min: -9, max: 9 }), { minLength: 64, maxLength: 64 }),
        fc.constantFrom(-2.5, 0.5, 3),
        (numbers, level) => {
          const field = { ...plane(8, 1, () => 0), values: Float32Array.from(numbers) };
          for (const line of contourLines(field, Math.abs(level), Math.sign(level), Math.sign(level))) {
            if (line.isClosed) continue;
            const all = points(line);
            for (const [x, y] of [all[0], all[all.length - 1]] as [number, number][])
              expect(Math.max(Math.abs(x), Math.abs(y)), `end ${x}, ${y}`).toBeCloseTo(3.5, 5);
          }
        },
      ),
      { numRuns: 200 },
    );
  });
});

describe("round the circle", () => {
  function circle(value: (lon: number, lat: number) => number, closesCircle = true): EvenField {
    const nLon = 72;
    const nLat = 37;
    const values = Float32Array.from({ length: nLat * nLon }, (_, i) =>
      value(170 + 5 * (i % nLon), -90 + 5 * Math.floor(i / nLon)),
    );
    return { values, nLat, nLon, lat0: -90, dLat: 5, lon0: 170, dLon: 5, closesCircle };
  }

  test("a line of latitude runs all the way round and meets itself 360° on", () => {
    const [line, ...others] = contourLines(
      circle((_, lat) => lat - 2.5),
      1,
      0,
      0,
    );
    expect(others).toEqual([]);
    const all = points(line as ContourLine);
    expect((line as ContourLine).isClosed).toBe(true);
    expect(Math.abs((all[all.length - 1] as [number, number])[0] - (all[0] as [number, number])[0])).toBeCloseTo(
      360,
      9,
    );
    for (const [, lat] of all) expect(lat).toBeCloseTo(2.5, 9);
  });

  test("a ring over the seam is one piece without a leap", () => {
    // Two highs at ±45°, one on the seam at 170°.
    const lines = contourLines(
      circle((lon, lat) => Math.cos(((lon - 170) * Math.PI) / 180) * Math.cos((lat * Math.PI) / 180)),
      0.5,
      1,
      1,
    );
    expect(lines).toHaveLength(1);
    const all = points(lines[0] as ContourLine);
    expect(lines[0]?.isClosed).toBe(true);
    for (let i = 1; i < all.length; i++)
      expect(Math.abs((all[i]?.[0] as number) - (all[i - 1]?.[0] as number))).toBeLessThanOrEqual(5);
  });

  test("a field that does not close the circle has no cells over its seam", () => {
    const lines = contourLines(
      circle((_, lat) => lat - 2.5, false),
      1,
      0,
      0,
    );
    expect(lines).toHaveLength(1);
    expect(lines[0]?.isClosed).toBe(false);
    const all = points(lines[0] as ContourLine);
    expect(Math.abs((all[all.length - 1]?.[0] as number) - (all[0]?.[0] as number))).toBeCloseTo(355, 9);
  });
});
