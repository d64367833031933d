import { describe, expect, test } from "vitest";
import { acceptedSpellings, conversion, kindsOf, type UnitKind } from "../../../core/units/units.ts";

/** A value of the file in the core's unit. */
function converted(kind: UnitKind, spelling: string, value: number): number {
  const found = conversion(kind, spelling);
  if (found === null) throw new Error(`${spelling} is not known`);
  return value * found.factor + found.offset;
}

describe("exact definitions", () => {
  test.each([
    // 3rd CGPM 1901 and the WMO's geopotential metre: g₀ = 9.80665 m s⁻²
    ["geopotential", "m2 s-2", 9.80665 * 1000, 1000],
    ["geopotential", "m**2 s**-2", 9.80665, 1],
    ["geopotential", "J kg-1", 98.0665, 10],
    ["height", "dam", 552, 5520],
    ["height", "km", 5.5, 5500],
    ["height", "gpm", 5520, 5520],
    // SI brochure, table 8: the nautical mile is 1852 m
    ["wind", "kt", 3600, 1852],
    ["wind", "km/h", 36, 10],
    ["wind", "m s^-1", 25, 25],
    // SI brochure: 0 °C is 273.15 K
    ["temperature", "degC", 0, 273.15],
    ["temperature", "°C", -40, 233.15],
    ["temperature", "K", 250, 250],
    ["pressure", "Pa", 50_000, 500],
    ["pressure", "millibars", 500, 500],
    ["pressure", "kPa", 50, 500],
  ] as const)("%s: %s", (kind, spelling, value, want) => {
    // One product and one sum, each rounded once, of a factor that was rounded once.
    expect(Math.abs(converted(kind, spelling, value) - want)).toBeLessThanOrEqual(
      4 * 2 ** -53 * Math.max(value, want, 273.15),
    );
  });
});

describe("spellings", () => {
  test.each([
    ["wind", "M S-1"],
    ["wind", "  m   s-1 "],
    ["wind", "m s⁻¹"],
    ["wind", "m·s⁻¹"],
    ["wind", "m⋅s−1"],
    ["geopotential", "m² s⁻²"],
    ["geopotential", "m²·s⁻²"],
    ["geopotential", "m²/s²"],
    ["geopotential", "m2  s-2"],
    ["height", "Geopotential Metres"],
    ["temperature", "degree_Celsius"],
    ["temperature", "degree  Celsius"],
    ["temperature", "deg_K"],
    ["temperature", "degree_K"],
    ["wind", "\tm/s\n"],
    ["pressure", "HPA"],
    ["pressure", "hectopascals"],
  ] as const)("%s: %j is known", (kind, spelling) => {
    expect(conversion(kind, spelling)).not.toBeNull();
  });

  test.each([
    ["wind", "m"],
    ["wind", "mph"],
    ["wind", "ms-1"],
    ["wind", "s m-1"],
    ["wind", "m s-2"],
    ["wind", "m s⁻³"],
    ["geopotential", "m s-1"],
    ["height", "geopotential"],
    ["height", "10 m"],
    ["height", "constructor"],
    ["height", "__proto__"],
    ["temperature", "K s-1"],
    ["pressure", "mmHg"],
    ["pressure", "MPa"],
    ["height", "feet"],
    ["height", ""],
    ["temperature", "F"],
    ["pressure", "bar"],
    ["pressure", "1"],
  ] as const)("%s: %j is not guessed", (kind, spelling) => {
    expect(conversion(kind, spelling)).toBeNull();
  });

  test("each kind has one unit inside, and it is its own", () => {
    for (const [kind, units] of [
      ["height", "gpm"],
      ["wind", "m s-1"],
      ["temperature", "K"],
      ["pressure", "hPa"],
    ] as const)
      expect(conversion(kind, units)).toEqual({ units, factor: 1, offset: 0 });
    // Geopotential is turned into height.
    expect(conversion("geopotential", "m2 s-2")?.units).toBe("gpm");
  });

  test("what a spelling can stand for, and what messages offer", () => {
    expect(kindsOf("m")).toEqual(["height"]);
    expect(kindsOf("m2/s2")).toEqual(["geopotential"]);
    expect(["m s-1", "K", "mb", "furlong", ""].map(kindsOf)).toEqual([["wind"], ["temperature"], ["pressure"], [], []]);
    expect(conversion("weight" as UnitKind, "kg")).toBeNull();
    for (const kind of ["height", "geopotential", "wind", "temperature", "pressure"] as const)
      for (const spelling of acceptedSpellings(kind).split(", "))
        expect(conversion(kind, spelling), spelling).not.toBeNull();
  });
});
