import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { LIBRARIES } from "../../../../app/codecs/libraries.ts";
import type { Correction } from "../../../../core/formats/dataset.ts";
import type { WrittenFile, WrittenVariable } from "../../../../core/formats/netcdf/write.ts";
import { openFile } from "../../../../core/formats/open-file.ts";
import { smallFile, writtenSource } from "../written.ts";

const open = (file: WrittenFile, corrections: readonly Correction[] = []) =>
  openFile(writtenSource(file), LIBRARIES, corrections);

const SIZES = { time: 3, lev: 2, lat: 4, lon: 5 } as const;
type Axis = keyof typeof SIZES;
const AXES = Object.keys(SIZES) as Axis[];
/** Along each axis, as the core orders them. */
const COORDINATES: Readonly<Record<Axis, readonly number[]>> = {
  time: [0, 6, 12],
  lev: [250, 500],
  lat: [-60, -20, 20, 60],
  lon: [-180, -108, -36, 36, 108],
};
const UNITS: Readonly<Record<Axis, string>> = {
  time: "hours since 2001-02-09",
  lev: "hPa",
  lat: "degrees_north",
  lon: "degrees_east",
};
/** The number at each point tells where it is: no two points share one. */
const valueAt = (time: number, lev: number, lat: number, lon: number) => time * 1e6 + lev * 1e3 + lat + lon / 1000;

/** The same field with its dimensions in this order and some axes turned round. */
function turnedFile(order: readonly Axis[], turned: ReadonlySet<Axis>, packed: boolean): WrittenFile {
  const along = (axis: Axis) => (turned.has(axis) ? COORDINATES[axis].toReversed() : COORDINATES[axis]);
  let points: Partial<Record<Axis, number>>[] = [{}];
  for (const axis of order) points = points.flatMap((point) => along(axis).map((at) => ({ ...point, [axis]: at })));
  const numbers = points.map((p) => valueAt(p.time as number, p.lev as number, p.lat as number, p.lon as number));
  return {
    dimensions: SIZES,
    attributes: {},
    variables: [
      ...AXES.map((axis) => ({
        name: axis,
        dims: [axis],
        attributes: { units: UNITS[axis] },
        data: Float64Array.from(along(axis)),
      })),
      {
        name: "z",
        dims: order,
        attributes: { units: "m", ...(packed ? { scale_factor: 0.5 } : {}) },
        data: Float64Array.from(numbers, (x) => (packed ? 2 * x : x)),
      },
    ],
  };
}

test("whatever the order of the dimensions and the direction of the axes, a slab is time, level, south → north, west → east", async () => {
  const anyFile = fc.record({
    order: fc.shuffledSubarray(AXES, { minLength: 4 }),
    turned: fc.subarray<Axis>(["lat", "lon", "lev"]).map((axes) => new Set(axes)),
    packed: fc.boolean(),
    times: fc.constantFrom([0, 3], [1, 2], [1, 3]) as fc.Arbitrary<readonly [number, number]>,
    rows: fc.constantFrom([0, 4], [1, 3], [3, 4]) as fc.Arbitrary<readonly [number, number]>,
    levels: fc.constantFrom([0, 1], [1, 0], [1], undefined),
  });
  await fc.assert(
    fc.asyncProperty(anyFile, async ({ order, turned, packed, times, rows, levels }) => {
      const file = await open(turnedFile(order, turned, packed));
      const [field] = file.contents.fields;
      if (field === undefined) throw new Error(file.contents.leftOut[0]?.why);
      expect([...field.grid.lat]).toEqual(COORDINATES.lat);
      expect([...field.grid.lon]).toEqual(COORDINATES.lon);
      expect(field.grid.closesCircle).toBe(true);
      const hPa = [...(field.levels ?? [])];
      expect(hPa).toEqual(turned.has("lev") ? [500, 250] : [250, 500]);
      const { data, shape } = await file.read(field.key, { times, rows, ...(levels === undefined ? {} : { levels }) });
      const chosen = (levels ?? [0, 1]).map((level) => hPa[level] as number);
      const want = COORDINATES.time
        .slice(...times)
        .flatMap((time) =>
          chosen.flatMap((lev) =>
            COORDINATES.lat.slice(...rows).flatMap((lat) => COORDINATES.lon.map((lon) => valueAt(time, lev, lat, lon))),
          ),
        );
      expect(shape).toEqual([times[1] - times[0], chosen.length, rows[1] - rows[0], 5]);
      expect([...data]).toEqual(want); // doubling and halving are exact
    }),
    { numRuns: 200 },
  );
});

describe("axes that step but are no time", () => {
  const monthly = (coordinate: readonly WrittenVariable[]): WrittenFile => {
    const base = smallFile();
    const variables = base.variables.filter(({ name }) => name !== "time" && name !== "z");
    const z = { name: "z", dims: ["month", "lat", "lon"], attributes: { units: "gpm" }, data: new Float32Array(36) };
    return { ...base, dimensions: { ...base.dimensions, month: 3 }, variables: [...variables, ...coordinate, z] };
  };

  test("months with numbers of their own, or counted from 1", async () => {
    const own = { name: "month", dims: ["month"], attributes: { units: "1" }, data: Int16Array.of(12, 1, 2) };
    for (const [coordinate, values] of [
      [[own], [12, 1, 2]],
      [[], [1, 2, 3]],
    ] as const) {
      const [field] = (await open(monthly(coordinate))).contents.fields;
      expect(field?.steps).toMatchObject({ kind: "record", name: "month" });
      expect([...(field?.steps.values ?? [])]).toEqual(values);
    }
  });
});

describe("a level that the user states", () => {
  const surface = (attributes = {}): WrittenFile => {
    const base = smallFile();
    const variables = base.variables.filter(({ name }) => name !== "lev" && name !== "z");
    const z = {
      name: "z",
      dims: ["time", "lat", "lon"],
      attributes: { units: "gpm", ...attributes },
      data: new Float32Array(24),
    };
    return { ...base, variables: [...variables, z] };
  };
  const said = [{ file: "made.nc", variable: "z", level: 300 }];

  test("stands where the file states none, and before what the file states", async () => {
    expect((await open(surface())).contents.fields[0]?.levels).toBeNull();
    expect((await open(surface(), said)).contents.fields[0]?.levels).toEqual(Float64Array.of(300));
    expect((await open(surface({ level: 500 }), said)).contents.fields[0]?.levels).toEqual(Float64Array.of(300));
    const other = [{ file: "other.nc", variable: "z", level: 300 }];
    expect((await open(surface(), other)).contents.fields[0]?.levels).toBeNull();
  });
});

test("each variable of two or more dimensions that holds numbers, and serves no other, is a field or is left out with a reason", async () => {
  const base = smallFile();
  const numbers = (name: string, dims: readonly string[], attributes = {}): WrittenVariable => ({
    name,
    dims,
    attributes: { units: "gpm", ...attributes },
    data: new Float32Array(dims.reduce((size, dim) => size * ({ ...base.dimensions, a: 2, b: 2 }[dim] ?? 0), 1)),
  });
  const odd = [
    numbers("fine", ["lat", "lon"]),
    numbers("flat", ["time", "lat"]),
    numbers("column", ["lev", "lon"]),
    numbers("further", ["a", "b", "lat", "lon"]),
    numbers("nowhere", ["a", "b"]),
    numbers("fathoms", ["lat", "lon"], { standard_name: "geopotential_height", units: "fathoms" }),
    numbers("bounds", ["lat", "b"]),
    numbers("series", ["time"]),
  ];
  const variables = base.variables.map((variable) =>
    variable.name === "lat" ? { ...variable, attributes: { ...variable.attributes, bounds: "bounds" } } : variable,
  );
  const { contents } = await open({
    ...base,
    dimensions: { ...base.dimensions, a: 2, b: 2 },
    variables: [...variables, ...odd],
  });
  expect(contents.fields.map(({ variable }) => variable).sort()).toEqual(["fine", "z"]);
  expect(contents.leftOut.map(({ variable }) => variable).sort()).toEqual([
    "column",
    "fathoms",
    "flat",
    "further",
    "nowhere",
  ]);
  for (const { file, why } of contents.leftOut) {
    expect(file).toBe("made.nc");
    expect(why.length).toBeGreaterThan(20);
  }
});
