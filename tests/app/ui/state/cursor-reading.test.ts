import { expect, test } from "vitest";
import { cursorReading } from "../../../../app/ui/reading/cursor-reading.ts";
import { departures, presentMean } from "../../../../app/ui/reading/departures.ts";
import type { Grid } from "../../../../core/field/axes.ts";
import { field } from "./fields.ts";

const RADIANS = Math.PI / 180;
const { grid } = field();
const nLon = grid.lon.length;

/** 5500 + 120 cos 2(λ − 30°) + 40 cos 11λ on every row: methods of zonal waves, by hand. */
function values(on: Grid = grid): Float32Array<ArrayBuffer> {
  const out = new Float32Array(on.lat.length * on.lon.length);
  for (let i = 0; i < out.length; i++) {
    const lon = (on.lon[i % on.lon.length] as number) * RADIANS;
    out[i] = 5500 + 120 * Math.cos(2 * (lon - 30 * RADIANS)) + 40 * Math.cos(11 * lon);
  }
  return out;
}
// Values near 5660 stored as float32: each off by at most 2⁻¹² (half of 2¹²·2⁻²³); a share is a weighted mean of such errors
// with weights of at most 2/N, so it is off by at most 2·2⁻¹²; twice that for a difference of two such numbers.
const LIMIT = 4 * 2 ** -12;

function near(actual: number | undefined, expected: number, what: string): void {
  expect(Math.abs((actual ?? Number.NaN) - expected), `${what}: ${actual}, expected ${expected}`).toBeLessThanOrEqual(
    LIMIT,
  );
}

test("without a background the bars add up to the departure from the zonal mean", () => {
  const reading = cursorReading({ values: values(), background: null }, grid, 56, 11);
  expect([reading.lat, reading.lon, reading.of]).toEqual([55, 10, "zonal-mean"]);
  const two = 120 * Math.cos(2 * (10 - 30) * RADIANS);
  const eleven = 40 * Math.cos(110 * RADIANS);
  near(reading.value, 5500 + two + eleven, "value");
  near(reading.sum, two + eleven, "sum");
  expect(reading.anomaly).toBeNaN();
  const shares = reading.shares as Float64Array;
  expect(shares.length).toBe(10);
  const expected = [0, 0, two, 0, 0, 0, 0, 0, 0, eleven];
  expected.forEach((share, k) => {
    near(shares[k], share, `share ${k}`);
  });
  near(
    shares.reduce((a, b) => a + b, 0),
    reading.sum,
    "sum of shares",
  );
});

test("with a background they add up to the anomaly, whose mean is a bar of its own", () => {
  const background = new Float32Array(grid.lat.length * nLon).fill(5450);
  const reading = cursorReading({ values: values(), background }, grid, 55, 30);
  expect(reading.of).toBe("background");
  near(reading.anomaly, 50 + 120 + 40 * Math.cos(330 * RADIANS), "anomaly");
  near(reading.shares?.[0], 50, "mean");
  near(reading.shares?.[2], 120, "wave 2");
});

test("a row that misses a value has a number at the cursor, but no waves, and says why", () => {
  const gappy = values();
  gappy[29 * nLon] = Number.NaN; // 55°N, 0°
  const reading = cursorReading({ values: gappy, background: null }, grid, 55, 10);
  expect(reading.shares).toBe(null);
  expect(reading.whyNot).toContain("misses a value");
  expect(reading.sum).not.toBeNaN();
  expect(cursorReading({ values: gappy, background: null }, grid, 60, 10).whyNot).toBe(null);
});

test("a region has no waves, and says why", () => {
  const region: Grid = { lat: grid.lat, lon: grid.lon.slice(0, 20), closesCircle: false };
  const reading = cursorReading({ values: values(region), background: null }, region, 55, 10);
  expect(reading.shares).toBe(null);
  expect(reading.whyNot).toContain("does not close the circle");
});

test("departures are from the background, or from the mean of what is there", () => {
  expect(presentMean(Float32Array.of(1, Number.NaN, 3))).toBe(2);
  expect(presentMean(Float32Array.of(Number.NaN))).toBeNaN();
  const rows = Float32Array.of(1, Number.NaN, 3, 10, 20, 30);
  expect(Array.from(departures(rows, null, 3))).toEqual([-1, Number.NaN, 1, -10, 0, 10]);
  const background = Float32Array.of(1, 1, 1, Number.NaN, 5, 5);
  expect(Array.from(departures(rows, background, 3))).toEqual([0, Number.NaN, 2, Number.NaN, 15, 25]);
});
