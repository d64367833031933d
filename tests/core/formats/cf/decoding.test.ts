import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { decodeInPlace, decodingOf } from "../../../../core/formats/cf/decoding.ts";
import type { Attributes, StoredType } from "../../../../core/formats/variable-store.ts";

/** Values of a variable of this type that holds these numbers. */
function values(type: StoredType, stored: readonly number[], attributes: Attributes): number[] {
  const variable = { name: "z", type, dims: ["x"], shape: [stored.length], attributes };
  return [...decodeInPlace(Float64Array.from(stored), decodingOf(variable))];
}
const X = Number.NaN;

// The ways of packing on which netCDF4-python and the conventions agree are held against it in fields.test.ts.

describe("where the NetCDF Users Guide (appendix A, from memory) says what to do", () => {
  test("bytes have no fill value of their own: their range is too small for one", () => {
    expect(values("int8", [-127, -128, 0], {})).toEqual([-127, -128, 0]);
    expect(values("uint8", [255, 0], {})).toEqual([255, 0]);
    expect(values("uint8", [255, 0], { _FillValue: 255 })).toEqual([X, 0]);
  });

  test('_Unsigned is "true" or it is nothing, and only on whole numbers', () => {
    expect(values("int8", [-1, 1], { _Unsigned: "false" })).toEqual([-1, 1]);
    expect(values("int8", [-1, 1], { _Unsigned: "TRUE " })).toEqual([255, 1]);
    expect(values("float32", [-1, 1], { _Unsigned: "true" })).toEqual([-1, 1]);
    expect(values("uint8", [255, 1], { _Unsigned: "true" })).toEqual([255, 1]);
  });

  test("fill values and limits of unsigned numbers may be written signed or unsigned", () => {
    for (const fill of [255, -1])
      expect(values("int8", [-1, -2, 3], { _Unsigned: "true", _FillValue: fill })).toEqual([X, 254, 3]);
    for (const most of [200, -56])
      expect(values("int8", [-56, -55, 3, 0], { _Unsigned: "true", valid_range: [1, most] })).toEqual([200, X, 3, X]);
  });

  test("limits that the stored type can hold are of the stored numbers", () => {
    const packed = { scale_factor: 0.5, add_offset: 100 };
    expect(values("int16", [-1, 0, 10, 11], { ...packed, valid_range: [0, 10] })).toEqual([X, 100, 105, X]);
    expect(values("int16", [-1, 0, 10, 11], { ...packed, valid_min: 0 })).toEqual([X, 100, 105, 105.5]);
    expect(values("int16", [-1, 0, 10, 11], { ...packed, valid_max: 10 })).toEqual([99.5, 100, 105, X]);
  });

  test("limits that it cannot hold are of the unpacked values", () => {
    const kelvin = { scale_factor: 0.01, add_offset: 273.15 };
    // 200.5 K … 320.25 K: stored −7265 … 4710
    expect(values("int16", [-7266, -7265, 4710, 4711], { ...kelvin, valid_range: [200.5, 320.25] })).toEqual([
      X,
      -7265 * 0.01 + 273.15,
      4710 * 0.01 + 273.15,
      X,
    ]);
    expect(values("int16", [-32_000, 32_000], { ...kelvin, valid_range: [-1e5, 1e5] })).toEqual([
      -32_000 * 0.01 + 273.15,
      32_000 * 0.01 + 273.15,
    ]);
    // A scale that turns the order round
    expect(values("int16", [-3, -2, 1, 2], { scale_factor: -0.5, valid_range: [-0.5, 1] })).toEqual([X, 1, -0.5, X]);
    expect(values("int8", [-1, 10, 11], { _Unsigned: "true", scale_factor: 2, valid_max: 20.5 })).toEqual([X, 20, X]);
    expect(values("int16", [-1, 0, 1], { valid_min: -0.5 })).toEqual([X, 0, 1]);
  });
});

describe("attributes written wider than the data", () => {
  const single = Math.fround(1e20);
  test.each(["_FillValue", "missing_value"])("%s of 1e20 as a double beside floats", (name) => {
    expect(values("float32", [single, 1], { [name]: 1e20 })).toEqual([X, 1]);
  });

  test("limits of 0.1 as doubles beside floats", () => {
    const tenth = Math.fround(0.1);
    expect(values("float32", [-tenth, tenth, 0.25], { valid_range: [-0.1, 0.1] })).toEqual([-tenth, tenth, X]);
  });

  test("as text", () => {
    expect(values("int16", [-999, 4], { missing_value: "-999", scale_factor: "0.5" })).toEqual([X, 2]);
    expect(values("int16", [-999, 4], { missing_value: "none", scale_factor: "" })).toEqual([-999, 4]);
  });
});

test("limits of NaN limit nothing, infinite ones only what lies beyond", () => {
  expect(values("float64", [-5, 5, X], { valid_range: [X, X] })).toEqual([-5, 5, X]);
  expect(values("float64", [-5, 5], { valid_min: 0, valid_max: X })).toEqual([X, 5]);
  expect(values("int16", [-5, 5], { valid_range: [Number.NEGATIVE_INFINITY, 0] })).toEqual([-5, X]);
});

test("in place, and by the definition: missing as stored, wrapped, within limits, scaled", () => {
  const how = fc.record({
    missing: fc.uniqueArray(fc.integer({ min: -3, max: 3 }), { maxLength: 4 }),
    least: fc.constantFrom(Number.NEGATIVE_INFINITY, -2, 0),
    most: fc.constantFrom(Number.POSITIVE_INFINITY, 2, 254),
    wrap: fc.constantFrom(0, 256),
    scale: fc.constantFrom(1, 0.1, -2),
    offset: fc.constantFrom(0, 273.15),
  });
  fc.assert(
    fc.property(fc.array(fc.constantFrom(-3, -2, -1, 0, 1, 2, 3, 127, X)), how, (stored, decoding) => {
      const numbers = Float64Array.from(stored);
      const result = decodeInPlace(numbers, decoding);
      expect(result).toBe(numbers);
      const want = stored.map((x) => {
        if (decoding.missing.includes(x)) return X;
        const whole = x < 0 ? x + decoding.wrap : x;
        return whole >= decoding.least && whole <= decoding.most ? whole * decoding.scale + decoding.offset : X;
      });
      expect(want.every((value, i) => value === result[i] || (Number.isNaN(value) && Number.isNaN(result[i])))).toBe(
        true,
      );
    }),
  );
});
