import { describe, expect, test } from "vitest";
import { LIBRARIES } from "../../../../app/codecs/libraries.ts";
import { daysOf } from "../../../../core/field/calendar.ts";
import type { WrittenAttribute, WrittenVariable } from "../../../../core/formats/netcdf/write.ts";
import { openFile } from "../../../../core/formats/open-file.ts";
import { writtenSource } from "../written.ts";

type Attributes = Record<string, WrittenAttribute>;

/** A file of one field with these leading axes; each number counts its place. */
function forecastFile(
  axes: Record<string, { values: number[]; attributes: Attributes }>,
  extra: WrittenVariable[] = [],
) {
  const sizes = Object.fromEntries(Object.entries(axes).map(([name, { values }]) => [name, values.length]));
  const dims = [...Object.keys(axes), "lat", "lon"];
  const size = Object.values(sizes).reduce((product, n) => product * n, 1) * 6;
  return writtenSource(
    {
      dimensions: { ...sizes, lat: 2, lon: 3 },
      attributes: {},
      variables: [
        ...Object.entries(axes).map(([name, { values, attributes }]) => ({
          name,
          dims: [name],
          attributes,
          data: Float64Array.from(values),
        })),
        { name: "lat", dims: ["lat"], attributes: { units: "degrees_north" }, data: Float64Array.of(0, 10) },
        { name: "lon", dims: ["lon"], attributes: { units: "degrees_east" }, data: Float64Array.of(0, 10, 20) },
        ...extra,
        {
          name: "z",
          dims,
          attributes: { units: "gpm", standard_name: "geopotential_height" },
          data: Float64Array.from({ length: size }, (_, i) => i),
        },
      ],
    },
    "fc.nc",
  );
}

const SINCE = "hours since 2001-01-01 00:00:00";
const start = daysOf({ year: 2001, month: 1, day: 1 }, "standard");

describe("forecasts", () => {
  test("steps from one start are valid times, and the start is known", async () => {
    const file = await openFile(
      forecastFile({
        time: { values: [12], attributes: { units: SINCE, standard_name: "time" } },
        step: { values: [0, 6, 48], attributes: { units: "hours", standard_name: "forecast_period" } },
      }),
      LIBRARIES,
    );
    const [field] = file.contents.fields;
    expect(field).toMatchObject({ key: "fc.nc/z", reference: start + 0.5, members: null });
    expect([...(field?.steps.values ?? [])]).toEqual([start + 0.5, start + 0.75, start + 2.5]);
    expect((await file.read("fc.nc/z", { times: [1, 3] })).data[0]).toBe(6);
  });

  test("several starts are fields of their own, named by the start", async () => {
    const file = await openFile(
      forecastFile({
        forecast_reference_time: { values: [0, 12.5], attributes: { units: SINCE } },
        lead: { values: [0, 1], attributes: { units: "days" } },
      }),
      LIBRARIES,
    );
    expect(file.contents.fields.map(({ key }) => key)).toEqual(["fc.nc/z@2001-01-01T00", "fc.nc/z@2001-01-01T12:30"]);
    const [, second] = file.contents.fields;
    expect([...(second?.steps.values ?? [])]).toEqual([start + 12.5 / 24, start + 36.5 / 24]);
    expect((await file.read("fc.nc/z@2001-01-01T12:30", { times: [1, 2] })).data[0]).toBe(18);
  });

  test("valid times with the start beside them", async () => {
    const single = {
      name: "started",
      dims: [],
      attributes: { units: SINCE, standard_name: "forecast_reference_time" },
      data: Float64Array.of(6),
    };
    const file = await openFile(
      forecastFile({ time: { values: [6, 12], attributes: { units: SINCE } } }, [single]),
      LIBRARIES,
    );
    expect(file.contents.fields[0]).toMatchObject({ key: "fc.nc/z", reference: start + 0.25 });
  });

  test.each([
    [
      { step: { values: [0, 6], attributes: { units: "hours" } } },
      "count from a forecast's start that the file does not tell",
    ],
    [
      { time: { values: [0], attributes: { units: SINCE } }, step: { values: [6, 0], attributes: { units: "hours" } } },
      "forecast steps do not increase at step 2",
    ],
  ])("what cannot be understood is left out, with the reason %#", async (axes, words) => {
    const { contents } = await openFile(forecastFile(axes as never), LIBRARIES);
    expect(contents.fields).toEqual([]);
    expect(contents.leftOut[0]?.why).toContain(words);
  });
});

describe("members", () => {
  test("by standard name, axis E or a common name, with their own numbers or counted", async () => {
    const time = { values: [0], attributes: { units: SINCE } };
    for (const [name, attributes, values, members] of [
      ["number", {}, [3, 1], [3, 1]],
      ["who", { standard_name: "realization" }, [0, 1], [0, 1]],
      ["who", { axis: "E" }, [0.5, 1.5], [0, 1]],
    ] as const) {
      const file = await openFile(forecastFile({ time, [name]: { values: [...values], attributes } }), LIBRARIES);
      expect(file.contents.fields[0]?.members).toEqual(members);
      expect((await file.read("fc.nc/z", { times: [0, 1], member: 1 })).data[0]).toBe(6);
      await expect(file.read("fc.nc/z", { times: [0, 1], member: 2 })).rejects.toThrow(
        "has no member number 2; it has 2",
      );
    }
  });
});
