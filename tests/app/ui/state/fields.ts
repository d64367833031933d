import type { StepAxis } from "../../../../core/field/axes.ts";
import { daysOf } from "../../../../core/field/calendar.ts";
import type { FieldDescription, FileContents } from "../../../../core/formats/dataset.ts";

/** Daily steps from 1 January 2001. */
export function dailySteps(n: number, perDay = 1): StepAxis {
  const start = daysOf({ year: 2001, month: 1, day: 1 }, "standard");
  return {
    kind: "time",
    name: "time",
    values: Float64Array.from({ length: n }, (_, i) => start + i / perDay),
    calendar: "standard",
  };
}

export function recordSteps(n: number): StepAxis {
  return {
    kind: "record",
    name: "month",
    values: Float64Array.from({ length: n }, (_, i) => i + 1),
    calendar: "standard",
  };
}

/** A field of 5° rows and 10° columns round the circle. */
export function field(change: Partial<FieldDescription> = {}): FieldDescription {
  const file = change.file ?? "winter.nc";
  const variable = change.variable ?? "z";
  return {
    key: `${file}/${variable}`,
    file,
    variable,
    longName: "geopotential height",
    quantity: "geopotential_height",
    why: "standard name geopotential_height",
    unitsInFile: "m",
    members: null,
    reference: null,
    units: "gpm",
    grid: {
      lat: Float64Array.from({ length: 37 }, (_, i) => -90 + 5 * i),
      lon: Float64Array.from({ length: 36 }, (_, i) => 10 * i),
      closesCircle: true,
    },
    steps: dailySteps(60),
    levels: Float64Array.of(850, 500, 250),
    ...change,
  };
}

export function contentsOf(...fields: FieldDescription[]): FileContents {
  return {
    file: fields[0]?.file ?? "winter.nc",
    format: "netCDF classic (CDF-1)",
    bytes: 1000,
    fields,
    leftOut: [],
    notes: [],
    about: {},
  };
}
