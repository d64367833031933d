import { describe, expect, test } from "vitest";
import { recognition } from "../../../../core/formats/cf/quantity-of.ts";
import type { Correction } from "../../../../core/formats/dataset.ts";
import type { Attributes } from "../../../../core/formats/variable-store.ts";

function recognised(name: string, attributes: Attributes, said?: Omit<Correction, "file" | "variable">) {
  const variable = { name, type: "float32", dims: ["lat", "lon"], shape: [2, 2], attributes } as const;
  return recognition(variable, said === undefined ? undefined : { file: "f.nc", variable: name, ...said });
}

describe("by CF standard name (standard name table), whatever the variable is called", () => {
  test.each([
    ["geopotential_height", "m", "geopotential_height", "standard name geopotential_height"],
    ["geopotential", "m2 s-2", "geopotential_height", "standard name geopotential; divided by g to give height"],
    ["geopotential_height", "m**2 s**-2", "geopotential_height", "divided by g to give height"],
    ["eastward_wind", "m s-1", "eastward_wind", "standard name eastward_wind"],
    ["northward_wind", "knots", "northward_wind", "standard name northward_wind"],
    ["air_temperature", "K", "air_temperature", "standard name air_temperature"],
    ["  air_temperature ", "degC", "air_temperature", "standard name air_temperature"],
  ])("%s in %s", (standard_name, units, quantity, why) => {
    for (const name of ["whatever", "u"])
      expect(recognised(name, { standard_name, units })).toMatchObject({
        quantity,
        why: expect.stringContaining(why),
        unitsInFile: units,
      });
  });

  test("another standard name goes before a fitting short name", () => {
    expect(recognised("z", { standard_name: "surface_altitude", units: "m" })).toMatchObject({ quantity: null });
    expect(recognised("t", { standard_name: "constructor", units: "K" })).toMatchObject({ quantity: null });
    expect(recognised("t", { standard_name: "air_temperature standard_error", units: "K" })).toMatchObject({
      quantity: null,
    });
  });
});

describe("by a short name, with fitting units", () => {
  test.each([
    ["z", "m2 s-2", "geopotential_height"],
    ["Z500", "gpm", "geopotential_height"],
    ["hgt", "m", "geopotential_height"],
    ["phi_250hPa", "J/kg", "geopotential_height"],
    ["u", "m/s", "eastward_wind"],
    ["uwnd", "m s**-1", "eastward_wind"],
    ["ua850", "m s-1", "eastward_wind"],
    ["V_250", "kt", "northward_wind"],
    ["vgrdprs", "m/s", "northward_wind"],
    ["air", "degK", "air_temperature"],
    ["t850mb", "C", "air_temperature"],
  ])("%s in %s", (name, units, quantity) => {
    expect(recognised(name, { units })).toMatchObject({
      quantity,
      why: expect.stringContaining(`name ${name} with units ${units}`),
    });
  });

  test.each([
    ["z", "K"],
    ["u", "m"],
    ["v", ""],
    ["t", "s"],
    ["t2m", "K"],
    ["zeta", "m"],
    ["u12345", "m s-1"],
    ["su", "m s-1"],
  ])("%s in %j is not guessed, and keeps its units", (name, units) => {
    expect(recognised(name, { units })).toMatchObject({
      quantity: null,
      unitsInFile: units,
      conversion: { units, factor: 1, offset: 0 },
    });
  });

  test("why not, with the units that are known", () => {
    expect(recognised("q", { units: "m" })).toMatchObject({
      why: "neither its standard name nor its name is known; its units m are",
    });
    expect(recognised("q", { units: "kg kg-1" })).toMatchObject({
      why: "neither its standard name nor its name is known",
    });
  });
});

describe("units that are not known", () => {
  test.each([
    [
      { standard_name: "air_temperature", units: "F" },
      'x is temperature, but units "F" are not known. Known are: k, c',
    ],
    [{ standard_name: "eastward_wind" }, "x is eastward wind, but no units are stated. Known are: m s-1, kt, km h-1"],
    [{ standard_name: "geopotential_height", units: "K" }, 'units "K" are not known. Known are: m, dam, km, m2 s-2'],
  ])("%j", (attributes, words) => {
    expect(recognised("x", attributes as Attributes)).toEqual({ refused: expect.stringContaining(words) });
    expect(recognised("x", attributes as Attributes)).toEqual({
      refused: expect.stringContaining("Say which they are in the files panel."),
    });
  });
});

describe("what the user said", () => {
  test("goes before all else", () => {
    expect(
      recognised("u", { standard_name: "eastward_wind", units: "m s-1" }, { quantity: "northward_wind" }),
    ).toMatchObject({ quantity: "northward_wind", why: "you said so" });
  });

  test("units alone: the quantity is recognised as before, the file's own units are told", () => {
    expect(recognised("hgt", { units: "fathoms" }, { units: "dam" })).toMatchObject({
      quantity: "geopotential_height",
      why: "name hgt with units dam; you said its units are dam",
      unitsInFile: "fathoms",
      conversion: { units: "gpm", factor: 10, offset: 0 },
    });
  });

  test("both; geopotential is told", () => {
    expect(recognised("var129", {}, { quantity: "geopotential_height", units: "m2 s-2" })).toMatchObject({
      why: "you said so; divided by g to give height; you said its units are m2 s-2",
      unitsInFile: "",
    });
  });

  test("a quantity that its units do not fit is refused, not guessed", () => {
    expect(recognised("x", { units: "K" }, { quantity: "eastward_wind" })).toEqual({
      refused: expect.stringContaining('x is eastward wind, but units "K" are not known'),
    });
  });

  test("a level or a place apart changes nothing here", () => {
    expect(recognised("u", { units: "m s-1" }, { level: 500, apart: true })).toEqual(
      recognised("u", { units: "m s-1" }),
    );
  });
});
