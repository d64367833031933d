import { describe, expect, test } from "vitest";
import { LIBRARIES } from "../../../../app/codecs/libraries.ts";
import type { OpenFile } from "../../../../core/formats/dataset.ts";
import { openFile } from "../../../../core/formats/open-file.ts";
import { OpenRecords } from "../../../../core/formats/record/open-records.ts";
import { recordFields } from "../../../../core/formats/record/record-fields.ts";
import { smallFile, writtenSource } from "../written.ts";

/** Every number says where it is from: day · 1000 + level + member/100, and `mark` on top. */
function value(day: number, level: number, member: number, mark: number): number {
  return 1000 * day + level + member / 100 + mark;
}

interface Made {
  readonly days: readonly number[];
  readonly levels?: readonly number[];
  readonly members?: readonly number[] | null;
  readonly name?: string;
  readonly mark?: number;
  readonly lon?: readonly number[];
  readonly calendar?: string;
}

function made(file: string, { days, levels = [500, 250], members = null, name = "z", mark = 0, lon, calendar }: Made) {
  const data: number[] = [];
  for (const day of days)
    for (const member of members ?? [0])
      for (const level of levels) for (let i = 0; i < 12; i++) data.push(value(day, level, member, mark) + i / 1e4);
  const base = smallFile();
  const lons = Float32Array.from(lon ?? [0, 90, 180, 270]);
  const [, , lat] = base.variables;
  return writtenSource(
    {
      dimensions: {
        time: days.length,
        ...(members === null ? {} : { number: members.length }),
        lev: levels.length,
        lat: 3,
        lon: 4,
      },
      attributes: {},
      variables: [
        {
          name: "time",
          dims: ["time"],
          attributes: { units: "days since 2001-01-01", ...(calendar === undefined ? {} : { calendar }) },
          data: Float64Array.from(days),
        },
        ...(members === null
          ? []
          : [{ name: "number", dims: ["number"], attributes: {}, data: Int32Array.from(members) }]),
        { name: "lev", dims: ["lev"], attributes: { units: "hPa" }, data: Float32Array.from(levels) },
        lat as (typeof base.variables)[number],
        { name: "lon", dims: ["lon"], attributes: { units: "degrees_east" }, data: lons },
        {
          name,
          dims: ["time", ...(members === null ? [] : ["number"]), "lev", "lat", "lon"],
          attributes: { units: "gpm", standard_name: "geopotential_height" },
          data: Float64Array.from(data),
        },
      ],
    },
    file,
  );
}

async function opened(...files: ReturnType<typeof made>[]): Promise<OpenFile[]> {
  return Promise.all(files.map((file) => openFile(file, LIBRARIES)));
}

/** First number of each step and level of what is read. */
async function firsts(
  open: OpenRecords,
  key: string,
  times: [number, number],
  levels: number[] | undefined,
  member: number | null = null,
) {
  const field = open.field(key);
  const slab = await open.reader(field, member)({ times, ...(levels === undefined ? {} : { levels }) });
  const plane = slab.shape[2] * slab.shape[3];
  return Array.from({ length: slab.data.length / plane }, (_, i) => slab.data[i * plane]);
}

describe("along time", () => {
  test("files in any order make one record, read across their seams", async () => {
    const files = await opened(
      made("c.nc", { days: [4, 5] }),
      made("a.nc", { days: [0, 1] }),
      made("b.nc", { days: [2, 3] }),
    );
    for (const order of [files, [...files].reverse()]) {
      const open = new OpenRecords(order);
      expect(open.records.fields.map(({ key }) => key)).toEqual(["a.nc..c.nc/z"]);
      const [field] = open.records.fields;
      expect(field?.steps.values.length).toBe(6);
      expect(open.records.notes.get("a.nc..c.nc/z")).toEqual(["a.nc..c.nc/z is one record of 3 files."]);
      expect(await firsts(open, "a.nc..c.nc/z", [1, 5], [1])).toEqual([1250, 2250, 3250, 4250]);
      expect(await firsts(open, "a.nc..c.nc/z", [3, 4], undefined)).toEqual([3500, 3250]);
      // A single file's field is still there under its own key.
      expect(await firsts(open, "b.nc/z", [0, 1], [0])).toEqual([2500]);
    }
  });

  test("rows and memory at hand go through", async () => {
    const open = new OpenRecords(await opened(made("a.nc", { days: [0] }), made("b.nc", { days: [1] })));
    const field = open.field("a.nc..b.nc/z");
    const into = new Float64Array(2 * 4).fill(7);
    const slab = await open.reader(field, null)({ times: [0, 2], levels: [0], rows: [1, 2], into });
    expect(slab.data).toBe(into);
    expect(slab.shape).toEqual([2, 1, 1, 4]);
    expect([...slab.data].map((x) => Math.round(x * 1e4))).toEqual([
      5000004, 5000005, 5000006, 5000007, 15000004, 15000005, 15000006, 15000007,
    ]);
  });

  test("an overlap is told, and the file whose name sorts last wins", async () => {
    const open = new OpenRecords(
      await opened(made("new.nc", { days: [2, 3], mark: 0.5 }), made("old.nc", { days: [0, 1, 2] })),
    );
    const [field] = open.records.fields;
    const key = field?.key ?? "";
    expect(open.records.notes.get(key)).toContain(
      "2 fields are in both new.nc/z and old.nc/z; old.nc/z is used, for its name sorts last.",
    );
    expect(await firsts(open, key, [1, 4], [0])).toEqual([1500, 2500, 3500.5]);
  });

  test("gaps are told, with the times on either side", async () => {
    const open = recordFields(
      (await opened(made("a.nc", { days: [0, 1, 2] }), made("b.nc", { days: [5, 6, 8] }))).map((f) => f.contents),
    );
    expect([...open.notes.values()].flat()).toContain(
      "a.nc..b.nc/z has 2 gaps: nothing between 2001-01-03T00:00:00Z to 2001-01-06T00:00:00Z; 2001-01-07T00:00:00Z to 2001-01-09T00:00:00Z.",
    );
  });
});

describe("along level, member and variable", () => {
  test("levels of several files, and of several variables of one, from the ground up", async () => {
    const open = new OpenRecords(
      await opened(
        made("up.nc", { days: [0, 1], levels: [100, 250] }),
        made("low.nc", { days: [0, 1], levels: [850] }),
      ),
    );
    const [field] = open.records.fields;
    expect([...(field?.levels ?? [])]).toEqual([850, 250, 100]);
    expect(await firsts(open, field?.key ?? "", [0, 2], [2, 0, 1])).toEqual([100, 850, 250, 1100, 1850, 1250]);
    expect(await firsts(open, field?.key ?? "", [1, 2], undefined)).toEqual([1850, 1250, 1100]);
  });

  test("members of several files; one that lacks some steps reads as missing there, and it is told", async () => {
    const open = new OpenRecords(
      await opened(
        made("m0.nc", { days: [0, 1], members: [0] }),
        made("m12.nc", { days: [0, 1], members: [2, 1] }),
        made("m3.nc", { days: [1], members: [3] }),
      ),
    );
    const [field] = open.records.fields;
    expect(field?.members).toEqual([0, 1, 2, 3]);
    expect(await firsts(open, field?.key ?? "", [0, 2], [0], 2)).toEqual([500.02, 1500.02]);
    expect(await firsts(open, field?.key ?? "", [0, 2], [0], 3)).toEqual([Number.NaN, 1500.03]);
    expect([...open.records.notes.values()].flat().join(" ")).toContain(
      "there is no 500 hPa, member 3 at 1 of 2 steps, first 2001-01-01T00:00:00Z; 250 hPa, member 3 at 1 of 2 steps",
    );
    expect(() => open.reader(field as never, 9)).toThrow("has no member 9");
  });
});

describe("what stays apart", () => {
  const keys = async (...files: ReturnType<typeof made>[]) =>
    recordFields((await opened(...files)).map(({ contents }) => contents)).fields.map(({ key }) => key);

  test("other grids, calendars, and steps of another kind", async () => {
    const a = made("a.nc", { days: [0, 1] });
    expect(await keys(a, made("b.nc", { days: [2, 3], lon: [10, 100, 190, 280] }))).toEqual(["a.nc/z", "b.nc/z"]);
    expect(await keys(a, made("b.nc", { days: [2, 3], calendar: "noleap" }))).toEqual(["a.nc/z", "b.nc/z"]);
    expect(await keys(a, made("b.nc", { days: [30, 60] }))).toEqual(["a.nc/z", "b.nc/z"]);
  });

  test("rivals that hold the very same steps, unless they are a second copy of a part of a longer record", async () => {
    const a = made("a.nc", { days: [0, 1] });
    const rival = made("b.nc", { days: [0, 1], mark: 0.5 });
    expect(await keys(a, rival)).toEqual(["a.nc/z", "b.nc/z"]);
    expect(await keys(a, rival, made("c.nc", { days: [2, 3] }))).toEqual(["a.nc..c.nc/z"]);
  });

  test("what the user says is apart", async () => {
    const files = [made("a.nc", { days: [0, 1] }), made("b.nc", { days: [2, 3] })];
    const open = await Promise.all(
      files.map((file) => openFile(file, LIBRARIES, [{ file: "b.nc", variable: "z", apart: true }])),
    );
    expect(recordFields(open.map(({ contents }) => contents)).fields.map(({ key }) => key)).toEqual([
      "a.nc/z",
      "b.nc/z",
    ]);
  });
});

test("requests outside a record are refused in words", async () => {
  const open = new OpenRecords(await opened(made("a.nc", { days: [0] }), made("b.nc", { days: [1] })));
  const read = open.reader(open.field("a.nc..b.nc/z"), null);
  for (const request of [
    { times: [0, 3] },
    { times: [1, 1] },
    { times: [0, 1], levels: [2] },
    { times: [0, 1], levels: [] },
  ])
    await expect(read(request as never)).rejects.toThrow("are not inside its 2 steps, 2 levels, 1 members");
  expect(() => open.field("c.nc/z")).toThrow("c.nc/z is not open here");
});
