import { describe, expect, test } from "vitest";
import { openSmall, SMALL_FILES } from "./small-files.ts";

const GROUPS = [
  "simple",
  "bitmap",
  "all_missing",
  "constant",
  "negative",
  "scan",
  "ieee",
  "jpeg",
  "png",
  "ccsds",
  "complex",
  "hand",
];
/** What is refused in words: deeper images than the library reads, and padded intervals. */
const NOT_READ = ["jpeg_24", "ccsds_flags_46"];
const SINGLE = SMALL_FILES.filter(
  ({ name }) => GROUPS.some((group) => name.startsWith(group)) && !NOT_READ.includes(name),
);

/** Every value against the reference, to the last bit; a failure tells index and both values. */
function expectValues(found: Float64Array, expected: readonly (number | null)[]): void {
  expect(found.length).toBe(expected.length);
  expected.forEach((value, i) => {
    const own = found[i] as number;
    const same = value === null ? Number.isNaN(own) : own === value;
    if (!same) expect.fail(`value ${i} is ${own}, not ${value}`);
  });
}

describe("packings, whole tiny files", () => {
  test("there is a file of every packing", () => {
    for (const group of GROUPS) expect(SINGLE.some(({ name }) => name.startsWith(group))).toBe(true);
    expect(SINGLE.length).toBeGreaterThan(120);
  });

  // ecCodes 2.28 decodes to doubles by (X · 2^E + R) · 10^−D as the reader does: the values are the same to the last bit.
  // The PNGs' samples are those of GDAL's PNG driver, scaled in the same way.
  test.each(SINGLE.map(({ name }) => name))("%s", async (name) => {
    const reference = SINGLE.find((file) => file.name === name)?.messages?.[0];
    if (reference === undefined) throw new Error(`${name} has no reference`);
    const file = await openSmall(name);
    const [field] = file.contents.fields;
    if (field === undefined) throw new Error(`${name}: ${file.contents.leftOut.map(({ why }) => why)}`);
    const { data, shape } = await file.read(field.key, { times: [0, 1] });
    expect(shape).toEqual([1, 1, ...reference.shape]);
    expect(field.levels).toEqual(Float64Array.of(500));
    expectValues(data, reference.values);
  });
});

test("rows are cut out south → north in every scanning mode", async () => {
  for (const { name, messages } of SINGLE.filter((file) => file.name.startsWith("scan"))) {
    const file = await openSmall(name);
    const [field] = file.contents.fields;
    const { data } = await file.read(field?.key ?? "", { times: [0, 1], rows: [1, 3] });
    // Values were numbered from the south-western point on.
    expect([name, ...data]).toEqual([name, ...(messages?.[0]?.values.slice(8, 24) ?? [])]);
    expect(field?.grid.lat).toEqual(Float64Array.of(-60, -30, 0, 30, 60));
    expect(field?.grid.lon).toEqual(Float64Array.from({ length: 8 }, (_, i) => 45 * i));
    expect(field?.grid.closesCircle).toBe(true);
  }
});
