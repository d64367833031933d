import { expect, test } from "vitest";
import {
  withBackground,
  withBand,
  withChart,
  withCorrection,
  withMove,
  withPlace,
  withStep,
  withTitle,
  withTurn,
  withTurnToCursor,
  withWavesOf,
} from "../../../../app/ui/case/actions.ts";
import { emptyCase } from "../../../../app/ui/case/case.ts";
import { field } from "./fields.ts";

const START = emptyCase();
const REGION = field({
  grid: { lat: Float64Array.of(30, 40, 50), lon: Float64Array.of(-20, -10, 0, 10), closesCircle: false },
});

test("actions leave the case that they are given alone", () => {
  const before = structuredClone(START);
  withBand(START, [40, 60]);
  withMove(START, 1, 1, field());
  withBackground(START, { kind: "none" });
  withCorrection(START, { file: "a", variable: "b" });
  expect(START).toEqual(before);
});

test("the cursor steps over the grid: round the circle, but not over the pole", () => {
  const east = withMove({ ...START, cursor: { lat: 55, lon: 170, step: 0 } }, 0, 1, field());
  expect(east.cursor).toMatchObject({ lat: 55, lon: -180 });
  expect(withMove(east, 0, -1, field()).cursor.lon).toBe(170);
  const pole = withMove({ ...START, cursor: { lat: 90, lon: 0, step: 0 } }, 1, 0, field());
  expect(pole.cursor.lat).toBe(90);
});

test("on a region the cursor stops at the edge", () => {
  const start = { ...START, cursor: { lat: 50, lon: 10, step: 0 } };
  expect(withMove(start, 0, 1, REGION).cursor.lon).toBe(10);
  expect(withMove(start, 0, -9, REGION).cursor.lon).toBe(-20);
  expect(withMove(start, -9, 0, REGION).cursor.lat).toBe(30);
});

test("a place is the nearest grid point", () => {
  expect(withPlace(START, 51.9, -3, field()).cursor).toMatchObject({ lat: 50, lon: 0 });
  expect(withPlace(START, 52.6, 184, field()).cursor).toMatchObject({ lat: 55, lon: -180 });
});

test("steps stay within the record", () => {
  expect(withStep(START, -3, 60).cursor.step).toBe(0);
  expect(withStep(START, 99, 60).cursor.step).toBe(59);
  expect(withStep(START, 7.4, 60).cursor.step).toBe(7);
});

test("a band has its southern end first, and takes a cursor that stood on the old one along", () => {
  const banded = withBand(START, [60, 50]);
  expect(banded.waves.band).toEqual([50, 60]);
  expect(banded.cursor.lat).toBe(55);
  expect(withBand(banded, [30, 40]).cursor.lat).toBe(35);
  const away = { ...banded, cursor: { ...banded.cursor, lat: 20 } };
  expect(withBand(away, [30, 40]).cursor.lat).toBe(20);
  const south = withBand(away, [-60, -50]);
  expect(south.cursor.lat).toBe(-55);
  expect(south.chart.hemisphere).toBe("south");
});

test("without a background there is no anomaly; a background brings it back", () => {
  const none = withBackground(START, { kind: "none" });
  expect([none.waves.of, none.chart.shading]).toEqual(["field", "field"]);
  expect(withWavesOf(none, "anomaly")).toBe(none);
  const back = withBackground(none, { kind: "running-mean", days: 15 });
  expect([back.waves.of, back.chart.shading]).toEqual(["anomaly", "anomaly"]);
  // Another background is no reason to change what the user chose to see
  const ofField = withWavesOf(withChart(START, { shading: "field" }), "field");
  const other = withBackground(ofField, { kind: "running-mean", days: 9 });
  expect([other.waves.of, other.chart.shading]).toEqual(["field", "field"]);
});

test("the polar chart is turned, the belt is cut elsewhere", () => {
  expect(withTurn(START, 190).chart).toMatchObject({ turn: -170, cut: -180 });
  const belt = withChart(START, { kind: "belt" });
  expect(withTurn(belt, -15).chart).toMatchObject({ turn: 0, cut: 165 });
  const placed = { ...belt, cursor: { lat: 50, lon: -30, step: 0 } };
  expect(withTurnToCursor(placed).chart.cut).toBe(150); // 180° west of the cursor, so that it stands in the middle
  expect(withTurnToCursor(withChart(placed, { kind: "hemisphere" })).chart.turn).toBe(-30);
});

test("what is said of a variable takes the place of what was said before", () => {
  const first = withCorrection(START, { file: "a.nc", variable: "q", units: "m" });
  const other = withCorrection(first, { file: "b.nc", variable: "q", units: "K" });
  const last = withCorrection(other, { file: "a.nc", variable: "q", quantity: "geopotential_height" });
  expect(last.corrections).toEqual([
    { file: "b.nc", variable: "q", units: "K" },
    { file: "a.nc", variable: "q", quantity: "geopotential_height" },
  ]);
});

test("a case has a title", () => {
  expect(withTitle(START, "  ").title).toBe("Untitled");
  expect(withTitle(START, " A ").title).toBe("A");
});
