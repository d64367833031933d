import { expect, test } from "vitest";
import type { FileContents, OpenFile } from "../../../../core/formats/dataset.ts";
import { daysOfStamp, openSmall, type ReferenceMessage, smallFile } from "./small-files.ts";

/** What is checked against ecCodes message by message: the field's number for the message must be the message's. */
async function expectMessage(file: OpenFile, key: string, message: ReferenceMessage, member = 0): Promise<void> {
  const field = file.contents.fields.find((one) => one.key === key);
  if (field === undefined) throw new Error(`no field ${key} among ${file.contents.fields.map((one) => one.key)}`);
  const step = field.steps.values.indexOf(daysOfStamp(message.date, message.time));
  const level = field.levels?.findIndex((hPa) => Math.abs(hPa - message.level) < 1e-9) ?? -1;
  expect([step >= 0, level >= 0], `${key}: ${message.date} ${message.time} ${message.level}`).toEqual([true, true]);
  const { data } = await file.read(key, { times: [step, step + 1], levels: [level], member });
  expect([...data].map((value) => (Number.isNaN(value) ? null : value))).toEqual(message.values);
}

function messagesOf(name: string): readonly ReferenceMessage[] {
  const { messages } = smallFile(name);
  if (messages === null) throw new Error(`${name} has no messages`);
  return messages;
}

const keys = ({ fields }: FileContents): string[] => fields.map(({ key }) => key);
const reasons = ({ leftOut }: FileContents): string[] => leftOut.map(({ why }) => why);

test.each(["steps1", "steps2"])(
  "%s: minutes to days after one start make one forecast of valid times",
  async (name) => {
    const file = await openSmall(name);
    expect(keys(file.contents)).toEqual([`${name}/geopotential_height`]);
    const [field] = file.contents.fields;
    // 2017-01-01 12 UTC, and 0, 6, 2 × 6 and 24 hours on.
    const start = Date.UTC(2017, 0, 1, 12) / 86_400_000;
    expect(field?.reference).toBe(start);
    expect([...(field?.steps.values ?? [])]).toEqual([0, 0.25, 0.5, 1].map((days) => start + days));
    expect(field?.steps.kind).toBe("time");
    expect(field?.members).toBeNull();
    // The fifth message of steps1, an initialised analysis, is the first one's twin: the later of the two counts.
    const messages = messagesOf(name);
    for (const message of name === "steps1" ? messages.slice(1) : messages)
      await expectMessage(file, `${name}/geopotential_height`, message);
  },
);

test("members: by the product template of edition 2, by ECMWF's local part of edition 1; the control is number 0", async () => {
  const local = await openSmall("members1");
  expect(local.contents.fields[0]?.members).toEqual([0, 1, 2]);
  for (const [number, message] of messagesOf("members1").entries())
    await expectMessage(local, "members1/geopotential_height", message, number);
  const template = await openSmall("members2");
  // A negative perturbation that shares its number with a positive one is told apart by its sign.
  expect(template.contents.fields[0]?.members).toEqual([-1, 0, 1, 2]);
  const order = [0, 1, 2, -1];
  for (const [i, message] of messagesOf("members2").entries())
    await expectMessage(
      template,
      "members2/geopotential_height",
      message,
      template.contents.fields[0]?.members?.indexOf(order[i] as number),
    );
});

test.each([15, 26, 30, 36])("members by ECMWF's local definition %i", async (definition) => {
  const name = `members1_${definition}`;
  const file = await openSmall(name);
  expect(file.contents.fields[0]?.members).toEqual([0, 7]);
  const [seventh, control] = messagesOf(name) as [ReferenceMessage, ReferenceMessage];
  await expectMessage(file, `${name}/geopotential_height`, seventh, 1);
  await expectMessage(file, `${name}/geopotential_height`, control, 0);
});

test("members of reforecasts, product template 4.60", async () => {
  const file = await openSmall("reforecast2");
  expect(file.contents.fields[0]?.members).toEqual([1, 2]);
  for (const [i, message] of messagesOf("reforecast2").entries())
    await expectMessage(file, "reforecast2/geopotential_height", message, i);
});

test("a deterministic forecast is no second control of the ensemble beside it", async () => {
  const name = "members_beside_single";
  const file = await openSmall(name);
  expect(file.contents.fields.map(({ variable, members }) => [variable, members])).toEqual([
    ["geopotential_height", null],
    ["geopotential_height_members", [0, 1]],
  ]);
  const [single, control, first] = messagesOf(name) as [ReferenceMessage, ReferenceMessage, ReferenceMessage];
  await expectMessage(file, `${name}/geopotential_height`, single);
  await expectMessage(file, `${name}/geopotential_height_members`, control, 0);
  await expectMessage(file, `${name}/geopotential_height_members`, first, 1);
});

test.each(["statistics1", "statistics2"])(
  "%s: the mean of an ensemble is a field of its own, its spread is none",
  async (name) => {
    const file = await openSmall(name);
    expect(file.contents.fields.map(({ key, longName, members }) => [key, longName, members])).toEqual([
      [`${name}/geopotential_height_ensemble_mean`, "Geopotential height, ensemble mean", null],
    ]);
    expect(reasons(file.contents)).toEqual([expect.stringContaining("it is the spread")]);
    await expectMessage(file, `${name}/geopotential_height_ensemble_mean`, messagesOf(name)[0] as ReferenceMessage);
  },
);

test("analyses make one record; each forecast start is a field of its own", async () => {
  const name = "analyses_and_starts";
  const file = await openSmall(name);
  const all = [
    `${name}/geopotential_height`,
    `${name}/geopotential_height@2017-01-02T00`,
    `${name}/geopotential_height@2017-01-02T12`,
  ];
  expect(keys(file.contents)).toEqual(all);
  expect(file.contents.fields.map(({ reference }) => reference)).toEqual([null, 17_168, 17_168.5]);
  expect(file.contents.fields.map(({ steps }) => [...steps.values])).toEqual([
    [17_167, 17_167.5],
    [17_168.5, 17_169],
    [17_169],
  ]);
  for (const [i, message] of messagesOf(name).entries())
    await expectMessage(file, all[[0, 0, 1, 1, 2][i] as number] as string, message);
});

test("levels by scale factors, negative ones too, from the highest pressure down", async () => {
  const file = await openSmall("levels2");
  // 0.7 Pa, 50000 Pa, 850 · 10² Pa, 30 Pa, 1 Pa.
  expect(file.contents.fields[0]?.levels).toEqual(Float64Array.of(850, 500, 0.3, 0.01, 0.007));
  for (const message of messagesOf("levels2")) await expectMessage(file, "levels2/geopotential_height", message);
});

test("levels of edition 1 in hectopascals and, by ECMWF's type 210, in pascals; layers are no levels", async () => {
  const file = await openSmall("levels1");
  expect(file.contents.fields[0]?.levels).toEqual(Float64Array.of(70, 0.5));
  for (const message of messagesOf("levels1")) await expectMessage(file, "levels1/geopotential_height", message);
  const layers = await openSmall("layers2");
  expect(layers.contents.fields).toEqual([]);
  expect(reasons(layers.contents)).toEqual([
    "it lies on a layer between two levels, not on one pressure level (2 messages)",
  ]);
});

test("fields that share a message: sections 4 to 7 again with the same bitmap, and sections 3 to 7 again", async () => {
  const file = await openSmall("shared_message");
  expect(keys(file.contents)).toEqual(["shared_message/eastward_wind", "shared_message/northward_wind"]);
  const [u250, v250, u500] = messagesOf("shared_message") as [ReferenceMessage, ReferenceMessage, ReferenceMessage];
  expect(u250.values).toContain(null);
  expect(v250.values.map((value) => value === null)).toEqual(u250.values.map((value) => value === null));
  await expectMessage(file, "shared_message/eastward_wind", u250);
  await expectMessage(file, "shared_message/northward_wind", v250);
  await expectMessage(file, "shared_message/eastward_wind", u500);
});

test("the same message twice: the later counts, and it is said", async () => {
  const file = await openSmall("twice");
  expect(file.contents.notes).toEqual([
    "twice/geopotential_height at 500 hPa, 2017-01-01 12 UTC is in the file twice; the later message is used.",
  ]);
  const [first, second] = messagesOf("twice") as [ReferenceMessage, ReferenceMessage];
  expect(first.values).not.toEqual(second.values);
  await expectMessage(file, "twice/geopotential_height", second);
});

test("a level that one step lacks reads as missing, and it is said", async () => {
  const file = await openSmall("gap");
  expect(file.contents.notes).toEqual([
    "gap/geopotential_height at 850 hPa, 2017-01-01 12 UTC is not in the file and reads as missing.",
  ]);
  const { data, shape } = await file.read("gap/geopotential_height", { times: [0, 2] });
  expect(shape).toEqual([2, 2, 5, 8]);
  const isMissing = (from: number) => data.slice(from, from + 40).every(Number.isNaN);
  expect([0, 40, 80, 120].map(isMissing)).toEqual([false, false, true, false]);
  for (const message of messagesOf("gap")) await expectMessage(file, "gap/geopotential_height", message);
});

test("parameters by their codes in edition 2", async () => {
  const { contents } = await openSmall("parameters2");
  expect(
    contents.fields.map(({ variable, quantity, unitsInFile, units }) => [variable, quantity, unitsInFile, units]),
  ).toEqual([
    ["geopotential", "geopotential_height", "m2 s-2", "gpm"],
    ["geopotential_height", "geopotential_height", "gpm", "gpm"],
    ["eastward_wind", "eastward_wind", "m s-1", "m s-1"],
    ["northward_wind", "northward_wind", "m s-1", "m s-1"],
    ["air_temperature", "air_temperature", "K", "K"],
    ["relative_vorticity", null, "s-1", "s-1"],
    ["divergence", null, "s-1", "s-1"],
    ["parameter_0_19_7", null, "", ""],
    ["parameter_0_3_200_centre_98", null, "", ""],
  ]);
  expect(contents.fields[0]?.why).toBe("GRIB discipline 0, category 3, number 4; divided by g to give height");
  expect(contents.fields[5]?.why).toBe("its GRIB code, discipline 0, category 2, number 12, is none that is used here");
});

test("parameters by their codes in edition 1: WMO's table 2, ECMWF's 128, JMA's 200; two centres' fields stay apart", async () => {
  const { contents } = await openSmall("parameters1");
  expect(contents.fields.map(({ variable, quantity }) => [variable, quantity])).toEqual([
    ["geopotential", "geopotential_height"],
    ["air_temperature", "air_temperature"],
    ["eastward_wind", "eastward_wind"],
    ["northward_wind", "northward_wind"],
    ["relative_vorticity", null],
    ["divergence", null],
    ["geopotential_height", "geopotential_height"],
    ["geopotential_centre_7", "geopotential_height"],
    ["geopotential_height_centre_7", "geopotential_height"],
    ["air_temperature_centre_7", "air_temperature"],
    ["eastward_wind_centre_7", "eastward_wind"],
    ["northward_wind_centre_7", "northward_wind"],
    ["relative_vorticity_centre_7", null],
    ["divergence_centre_7", null],
    ["geopotential_height_centre_34", "geopotential_height"],
    ["parameter_2_150_centre_7", null],
  ]);
  expect(contents.fields[0]?.why).toBe("GRIB parameter 129 of table 128; divided by g to give height");
  expect(contents.about.institution).toBe("ECMWF, NCEP (Washington), Japan Meteorological Agency (Tokyo)");
});

test("a geopotential becomes a height: divided by g₀", async () => {
  const file = await openSmall("parameters1");
  const [z] = messagesOf("parameters1") as [ReferenceMessage];
  const { data, units } = await file.read("parameters1/geopotential", { times: [0, 1] });
  expect(units).toBe("gpm");
  data.forEach((height, i) => {
    const expected = (z.values[i] as number) / 9.80665;
    // 1/g₀ and the product are rounded once each.
    expect(Math.abs(height - expected)).toBeLessThanOrEqual(Math.abs(expected) * 2 ** -52);
  });
});

test("what the user says about a variable counts", async () => {
  const said = {
    file: "parameters2",
    variable: "parameter_0_19_7",
    quantity: "eastward_wind",
    units: "kt",
    apart: true,
  } as const;
  const { contents } = await openSmall("parameters2", [said]);
  const field = contents.fields.find(({ variable }) => variable === said.variable);
  expect(field).toMatchObject({ quantity: "eastward_wind", units: "m s-1", apart: true });
  const { units: _, ...noUnits } = said;
  const refused = await openSmall("parameters2", [noUnits]);
  expect(refused.contents.leftOut).toEqual([
    { file: "parameters2", variable: said.variable, why: expect.stringContaining("no units are stated") },
  ]);
  // Said of another file, it counts for nothing here.
  const other = await openSmall("parameters2", [{ ...said, file: "other" }]);
  expect(other.contents.fields.find(({ variable }) => variable === said.variable)?.quantity).toBeNull();
});

test("other levels and spans of time are left out with the reason", async () => {
  expect(reasons((await openSmall("left_out2")).contents)).toEqual([
    "it lies 10 m above the ground, not on a pressure level",
    "it lies at the surface, not on a pressure level",
    "it lies on a hybrid level, not on a pressure level",
    "it is an average, an accumulation or an extreme over time, no moment (2 messages)",
    "it is a probability, not a state of the atmosphere",
  ]);
  expect(reasons((await openSmall("left_out1")).contents)).toEqual([
    "it is an accumulation over time, no moment",
    "it is an average over time, no moment",
    "it is an average of several analyses, no moment",
    "it lies 2 m above the ground, not on a pressure level",
    "it lies on a hybrid level, not on a pressure level",
  ]);
});

test.each([
  [
    "grid_rotated_ll_pl_grib2",
    /its grid is rotated latitude–longitude.*regrid it to a regular latitude–longitude grid/,
  ],
  ["grid_reduced_gg_pl_32_grib2", /its grid is reduced Gaussian.*regrid it/],
  ["grid_reduced_gg_pl_32_grib1", /its grid is reduced Gaussian.*regrid it/],
  ["grid_sh_pl_grib2", /spectral coefficients \(spherical harmonic\).*transform it/],
  ["grid_polar_stereographic_pl_grib2", /its grid is polar stereographic.*regrid it/],
  ["grid_rotated_gg_pl_grib1", /its grid is rotated Gaussian.*regrid it/],
  ["second_order", /second-order packing, which is not read; repack it \(simple packing\)/],
  ["template_5_61", /template 5\.61 \(logarithmic packing\), is not read; repack it/],
  ["no_grid", /number \d+ of a catalogue, is not described in the file; regrid it/],
])("%s is refused by name, with what to do", async (name, words) => {
  const { contents } = await openSmall(name);
  expect(contents.fields).toEqual([]);
  expect(reasons(contents)).toEqual([expect.stringMatching(words)]);
});

test.each([
  ["jpeg_24", /24 bits per value, and up to 16 are read; repack it/],
  ["ccsds_flags_46", /intervals are padded, which is not read; repack it/],
])("%s cannot be decoded, and says so when it is read", async (name, words) => {
  const file = await openSmall(name);
  await expect(file.read(`${name}/geopotential_height`, { times: [0, 1] })).rejects.toThrow(words);
});

test("longitudes: a repeated meridian is left out, and a full circle rounded to thousandths is one", async () => {
  const repeated = await openSmall("repeated_meridian1");
  expect(repeated.contents.notes).toEqual([expect.stringContaining("the last column repeats the first meridian")]);
  expect(repeated.contents.fields[0]?.grid.lon.length).toBe(8);
  const [message] = messagesOf("repeated_meridian1") as [ReferenceMessage];
  const { data } = await repeated.read("repeated_meridian1/geopotential_height", { times: [0, 1] });
  expect([...data]).toEqual(message.values.filter((_, i) => i % 9 < 8));
  // T42's columns are 2.8125° apart; the header says 2.812 and ends at 357.188.
  const { grid } = (await openSmall("fine_circle1")).contents.fields[0] ?? {};
  expect(grid?.closesCircle).toBe(true);
  expect(grid?.lon).toEqual(Float64Array.from({ length: 128 }, (_, i) => 2.8125 * i));
});

test("requests outside a field, and unknown keys, are refused in words", async () => {
  const file = await openSmall("gap");
  const key = "gap/geopotential_height";
  await expect(file.read("gap/nothing", { times: [0, 1] })).rejects.toThrow("There is no field gap/nothing");
  await expect(file.read(key, { times: [0, 3] })).rejects.toThrow("not inside its 2 steps, 2 levels, 5 rows");
  await expect(file.read(key, { times: [1, 1] })).rejects.toThrow("not inside");
  await expect(file.read(key, { times: [0, 1], levels: [2] })).rejects.toThrow("not inside");
  await expect(file.read(key, { times: [0, 1], levels: [] })).rejects.toThrow("not inside");
  await expect(file.read(key, { times: [0, 1], rows: [0, 6] })).rejects.toThrow("not inside");
  await expect(file.read(key, { times: [0, 1], member: 1 })).rejects.toThrow("has no member number 1; it has 1");
});

test("a slab goes into memory that is handed in, if it has the size", async () => {
  const file = await openSmall("gap");
  const into = new Float64Array(16).fill(7);
  const request = { times: [0, 1], levels: [1], rows: [1, 3], into } as const;
  const slab = await file.read("gap/geopotential_height", request);
  expect(slab.data).toBe(into);
  const fresh = await file.read("gap/geopotential_height", { ...request, into: new Float64Array(3) });
  expect(fresh.data).toEqual(into);
  await file.close();
});
