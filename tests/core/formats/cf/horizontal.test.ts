import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { gridOf, orderedColumns, orderedRows } from "../../../../core/formats/cf/horizontal.ts";

const rows = (stored: readonly number[]) => orderedRows(Float64Array.from(stored), "f.nc, lat");
const columns = (stored: readonly number[]) => orderedColumns(Float64Array.from(stored), "f.nc, lon");
const even = (from: number, step: number, n: number) => Array.from({ length: n }, (_, i) => from + i * step);
const place = (first: number, step: number, i: number) => first + step * i;

describe("rows", () => {
  test("south first stays, north first is turned round, one row is one", () => {
    expect(rows([-45, 0, 45])).toMatchObject({ first: 0, step: 1, note: null });
    const turned = rows([45, 0, -45]);
    expect([[...turned.values], turned.first, turned.step]).toEqual([[-45, 0, 45], 2, -1]);
    expect([...rows([50]).values]).toEqual([50]);
  });

  test("the input is left as it was", () => {
    const stored = Float64Array.of(45, 0, -45);
    orderedRows(stored, "");
    expect([...stored]).toEqual([45, 0, -45]);
  });

  test.each([
    [[0, 50, 90.1], "f.nc, lat: row 2 is at latitude 90.1, which is none"],
    [[0, Number.NaN], "row 1 is at latitude NaN, which is none"],
    [[0, 50, 50], "latitudes do not run one way at row 2"],
    [[0, 50, 40], "latitudes do not run one way at row 2"],
    [[50, 0, 10], "latitudes do not run one way"],
  ])("%j is refused", (stored, words) => {
    expect(() => rows(stored)).toThrow(words);
    expect(() => rows(stored)).toThrow(expect.objectContaining({ name: "GridError" }));
  });

  test("a pole that storage moved a little is still one", () => {
    expect(rows([-90.00001, 0, 90.00001]).values.length).toBe(3);
  });
});

describe("columns", () => {
  test.each([
    // stored, ordered, place in the file of the first, direction
    [[0, 120, 240], [0, 120, 240], 0, 1],
    [[240, 120, 0], [0, 120, 240], 2, -1],
    [[180, -60, 60], [180, 300, 420], 0, 1],
    [[60, -60, 180], [180, 300, 420], 2, -1],
    [[0, 90, 180, 270, 360], [0, 90, 180, 270], 0, 1],
    [[-180, -90, 0, 90, 180], [-180, -90, 0, 90], 0, 1],
    // The first meridian twice, from the east: the one that is left out stands first in the file
    [[360, 270, 180, 90, 0], [0, 90, 180, 270], 4, -1],
    // … and with the jump at the date line
    [[0, 90, 180, -90, 0], [0, 90, 180, 270], 0, 1],
    [[180, -90, 0, 90, 180], [180, 270, 360, 450], 0, 1],
    // Two columns: a rise is a rise, and a jump is one
    [[10, 350], [10, 350], 0, 1],
    [[350, 10], [350, 370], 0, 1],
    [[20, 10], [10, 20], 1, -1],
    [[-170, 170], [-170, 170], 0, 1],
    [[7], [7], 0, 1],
    [[-190], [170], 0, 1],
    [[360], [0], 0, 1],
    [[-540, -530], [-180, -170], 0, 1],
    [[1000, 1010], [280, 290], 0, 1],
    // A region across the date line
    [[170, 175, -180, -175], [170, 175, 180, 185], 0, 1],
    [[-175, -180, 175, 170], [170, 175, 180, 185], 3, -1],
  ])("%j → %j", (stored, want, first, step) => {
    const found = columns(stored);
    expect([[...found.values], found.first, found.step]).toEqual([want, first, step]);
  });

  test("a repeated meridian is told", () => {
    expect(columns([0, 90, 180, 270, 360]).note).toBe(
      "f.nc, lon: the last column repeats the first meridian and is left out.",
    );
    expect(columns([0, 90, 180, 270]).note).toBeNull();
  });

  test.each([
    [[0, 20, 20, 30], "f.nc, lon: longitudes do not run one way at column 2"],
    [[0, 20, 10, 30], "longitudes do not run one way at column 2"],
    [[170, -170, -180], "longitudes do not run one way"],
    [[0, 90, 180, -90, 0, 90], "longitudes run over 450.00°, more than one circle"],
    [[90, 180, -90, 180, -90], "longitudes do not run one way at column 4"],
    [[0, 120, 240, 380], "longitudes run over 380.00°, more than one circle"],
    [[0, 20, 10, 5], "longitudes do not run one way"],
    [[0, Number.NaN, 20], "longitudes do not run one way at column 1"],
    [[Number.NaN], "the first longitude is NaN"],
    [[], "the first longitude is undefined"],
    [[Number.POSITIVE_INFINITY], "the first longitude is Infinity"],
  ])("%j is refused", (stored, words) => {
    expect(() => columns(stored)).toThrow(words);
    expect(() => columns(stored)).toThrow(expect.objectContaining({ name: "GridError" }));
  });

  test("a whole circle, however it is written: increasing from [−180, 360), each column on its own meridian, closed", () => {
    const circle = fc.record({
      n: fc.integer({ min: 3, max: 40 }),
      start: fc.integer({ min: -360, max: 719 }),
      // The range that the file keeps its longitudes in
      lowest: fc.constantFrom(-180, 0, Number.NEGATIVE_INFINITY),
      isFalling: fc.boolean(),
      isRepeated: fc.boolean(),
      isSingle: fc.boolean(),
    });
    fc.assert(
      fc.property(circle, ({ n, start, lowest, isFalling, isRepeated, isSingle }) => {
        const meridians = even(start, 360 / n, isRepeated ? n + 1 : n);
        const kept = meridians.map((lon) =>
          lowest === Number.NEGATIVE_INFINITY ? lon : lon - 360 * Math.floor((lon - lowest) / 360),
        );
        if (isFalling) kept.reverse();
        const stored = isSingle ? kept.map(Math.fround) : kept;
        const { values, first, step } = columns(stored);
        expect(values.length).toBe(n);
        expect(values[0]).toBeGreaterThanOrEqual(-180);
        expect(values[0]).toBeLessThan(360);
        values.forEach((lon, i) => {
          if (i > 0) expect(lon).toBeGreaterThan(values[i - 1] as number);
          const turns = (lon - (stored[place(first, step, i)] as number)) / 360;
          // Sums of whole turns in float64: a few last places of 1000
          expect(Math.abs(turns - Math.round(turns))).toBeLessThan(1e-14);
        });
        expect(gridOf(rows([0]), { values, first, step, note: null }).closesCircle).toBe(true);
      }),
      { numRuns: 1000 },
    );
  });

  test("a region, wherever it starts and whichever way it runs", () => {
    const region = fc.record({
      n: fc.integer({ min: 3, max: 30 }),
      step: fc.constantFrom(0.25, 1, 2.5, 5),
      start: fc.integer({ min: -180, max: 359 }),
      lowest: fc.constantFrom(-180, 0),
      isFalling: fc.boolean(),
    });
    fc.assert(
      fc.property(region, ({ n, step, start, lowest, isFalling }) => {
        const stored = even(start, step, n).map((lon) => lon - 360 * Math.floor((lon - lowest) / 360));
        if (isFalling) stored.reverse();
        const found = columns(stored);
        expect(found.step).toBe(isFalling ? -1 : 1);
        for (let i = 1; i < n; i++)
          expect((found.values[i] as number) - (found.values[i - 1] as number)).toBeCloseTo(step, 10);
      }),
    );
  });
});
