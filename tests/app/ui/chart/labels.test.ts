import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { corners, overlap, placedLabels, type TurnedBox, type WantedLabel } from "../../../../app/ui/chart/labels.ts";

type Point = readonly [number, number];

/** Whether two convex outlines share a point inside both, found by cutting one with the other's sides (Sutherland & Hodgman 1974). */
function sharedArea(a: readonly Point[], b: readonly Point[]): number {
  let cut = [...a];
  b.forEach((from, i) => {
    const to = b[(i + 1) % b.length] as Point;
    const side = ([x, y]: Point): number => (to[0] - from[0]) * (y - from[1]) - (to[1] - from[1]) * (x - from[0]);
    const kept: Point[] = [];
    cut.forEach((here, j) => {
      const next = cut[(j + 1) % cut.length] as Point;
      const [s, t] = [side(here), side(next)];
      if (s >= 0) kept.push(here);
      if (s * t < 0)
        kept.push([here[0] + (s / (s - t)) * (next[0] - here[0]), here[1] + (s / (s - t)) * (next[1] - here[1])]);
    });
    cut = kept;
  });
  return Math.abs(
    cut.reduce((sum, [x, y], i) => {
      const [u, v] = cut[(i + 1) % cut.length] as Point;
      return sum + (x * v - u * y) / 2;
    }, 0),
  );
}

const anyPlace = fc.record({
  x: fc.double({ min: 0, max: 300, noNaN: true }),
  y: fc.double({ min: 0, max: 300, noNaN: true }),
  angle: fc.double({ min: -Math.PI / 2, max: Math.PI / 2, noNaN: true }),
});
const anyBox = fc
  .tuple(anyPlace, fc.double({ min: 2, max: 60, noNaN: true }), fc.double({ min: 2, max: 20, noNaN: true }))
  .map(([place, width, height]): TurnedBox => ({ ...place, width, height }));
const anyLabel = fc
  .tuple(fc.array(anyPlace, { minLength: 1, maxLength: 5 }), fc.double({ min: 8, max: 60, noNaN: true }))
  .map(([places, width]): WantedLabel => ({ text: "5280", width, height: 10, places }));

const everywhere = (): boolean => true;

describe("overlap", () => {
  test("agrees with the area that two turned boxes share", () => {
    fc.assert(
      fc.property(anyBox, anyBox, (a, b) => {
        const area = sharedArea(corners(a), corners(b));
        // Boxes that barely touch may be judged either way.
        if (area > 1e-6) expect(overlap(a, b)).toBe(true);
        else if (area === 0) expect(overlap(a, b)).toBe(false);
      }),
      { numRuns: 2000 },
    );
  });
});

describe("placedLabels", () => {
  const boxOf = (label: WantedLabel, place: { x: number; y: number; angle: number }): TurnedBox => ({
    ...place,
    width: label.width,
    height: label.height,
  });

  test("no label lies on another or on what is taken, and each is at a place it asked for", () => {
    fc.assert(
      fc.property(
        fc.array(anyLabel, { maxLength: 14 }),
        fc.array(anyBox, { maxLength: 4 }),
        fc.array(anyBox, { maxLength: 2 }),
        (wanted, taken, moreTaken) => {
          const settled = placedLabels(wanted, taken, everywhere);
          for (const [obstacles, placed] of [
            [taken, settled],
            [[...taken, ...moreTaken], placedLabels(wanted, [...taken, ...moreTaken], everywhere, settled)],
          ] as const) {
            placed.forEach((label, i) => {
              const own = boxOf(wanted[label.index] as WantedLabel, label);
              expect(wanted[label.index]?.places).toContainEqual({ x: label.x, y: label.y, angle: label.angle });
              for (const other of placed.slice(0, i))
                expect(
                  sharedArea(corners(own), corners(boxOf(wanted[other.index] as WantedLabel, other))),
                  `${i} and another`,
                ).toBe(0);
              for (const box of obstacles)
                expect(sharedArea(corners(own), corners(box)), `${i} and what is taken`).toBe(0);
            });
            expect(new Set(placed.map(({ index }) => index)).size).toBe(placed.length);
          }
        },
      ),
      { numRuns: 300 },
    );
  });

  const label = (...xs: number[]): WantedLabel => ({
    text: "x",
    width: 20,
    height: 10,
    places: xs.map((x) => ({ x, y: 0, angle: 0 })),
  });

  test("the first place that is free is taken; without one the label is left out", () => {
    const placed = placedLabels([label(0), label(0, 100), label(5)], [], everywhere);
    expect(placed.map(({ index, x }) => [index, x])).toEqual([
      [0, 0],
      [1, 100],
    ]);
  });

  test("a label steps aside for one that has no other place", () => {
    const placed = placedLabels([label(0, 100), label(0)], [], everywhere);
    expect(placed.map(({ index, x }) => [index, x])).toEqual([
      [0, 100],
      [1, 0],
    ]);
  });

  test("a wider gap is kept free", () => {
    const wide: WantedLabel = { ...label(26), gap: 6 };
    expect(placedLabels([label(0), wide], [], everywhere)).toHaveLength(1);
    expect(placedLabels([label(0), label(26)], [], everywhere)).toHaveLength(2);
  });

  test("held labels stay where they are though a better place is free, but not on what is taken", () => {
    const wanted = [label(0, 100), label(200)];
    const held = [
      { index: 0, text: "x", x: 100, y: 0, angle: 0 },
      { index: 1, text: "x", x: 200, y: 0, angle: 0 },
    ];
    const taken: TurnedBox = { x: 200, y: 0, angle: 0, width: 4, height: 4 };
    expect(placedLabels(wanted, [taken], everywhere, held).map(({ index, x }) => [index, x])).toEqual([[0, 100]]);
  });

  test("outside of where labels may be there is no place", () => {
    expect(placedLabels([label(0)], [], () => false)).toEqual([]);
  });
});
