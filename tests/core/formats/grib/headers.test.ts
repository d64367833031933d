import { expect, test } from "vitest";
import { LIBRARIES } from "../../../../app/codecs/libraries.ts";
import { validSeconds } from "../../../../core/formats/grib/forecast-time.ts";
import { ibmFloat, signed8, signed16, signed24, signed32, unsigned64 } from "../../../../core/formats/grib/octets.ts";
import { openGrib } from "../../../../core/formats/grib/open-grib.ts";
import { memorySource } from "../../../../core/formats/memory-source.ts";
import { smallFile } from "./small-files.ts";

const seconds = (text: string): number => Date.parse(`${text}Z`) / 1000;

// Units of FM 92: edition 1, code table 4; edition 2, code table 4.4.
test.each([
  [1, 0, 90, "2000-02-28T01:30"],
  [1, 1, 48, "2000-03-01T00:00"],
  [1, 2, 2, "2000-03-01T00:00"],
  [1, 3, 1, "2000-03-28T00:00"],
  [1, 4, 1, "2001-02-28T00:00"],
  [1, 5, 1, "2010-02-28T00:00"],
  [1, 6, 1, "2030-02-28T00:00"],
  [1, 7, 1, "2100-02-28T00:00"],
  [1, 10, 2, "2000-02-28T06:00"],
  [1, 11, 2, "2000-02-28T12:00"],
  [1, 12, 2, "2000-02-29T00:00"],
  [1, 13, 2, "2000-02-28T00:30"],
  [1, 14, 1, "2000-02-28T00:30"],
  [1, 254, 30, "2000-02-28T00:00:30"],
  [2, 13, 30, "2000-02-28T00:00:30"],
  [2, 1, -24, "2000-02-27T00:00"],
  [2, 3, -2, "1999-12-28T00:00"],
] as const)("edition %i, unit %i, step %i is valid at %s", (edition, unit, step, valid) => {
  expect(validSeconds(edition, seconds("2000-02-28T00:00"), step, unit)).toBe(seconds(valid));
});

test("a month that lacks the day ends on its last", () => {
  expect(validSeconds(1, seconds("2001-01-31T06:00"), 1, 3)).toBe(seconds("2001-02-28T06:00"));
  expect(validSeconds(1, seconds("2000-02-29T06:00"), 1, 4)).toBe(seconds("2001-02-28T06:00"));
});

test("units without a length, and steps beyond the calendar, are refused", () => {
  expect(() => validSeconds(2, 0, 1, 14)).toThrow("a unit of time, number 14, that is not known");
  expect(() => validSeconds(2, 0, 2 ** 31 - 1, 2)).toThrow("longer than any");
  expect(() => validSeconds(2, 0, 2 ** 30, 7)).toThrow("leads to the year");
  expect(validSeconds(2, 5, 0, 99)).toBe(5);
});

test("numbers with a sign bit, and IBM's floating point", () => {
  const bytes = Uint8Array.of(0x80, 0x00, 0x01, 0x05, 0x81);
  expect([signed8(bytes, 4), signed16(bytes, 0), signed24(bytes, 0), signed32(bytes, 0)]).toEqual([-1, 0, -1, -261]);
  expect(unsigned64(Uint8Array.of(0, 0, 0, 1, 0, 0, 0, 2), 0)).toBe(2 ** 32 + 2);
  // IBM System/360 Principles of Operation: −118.625 is C2 76 A0 00.
  expect(ibmFloat(Uint8Array.of(0xc2, 0x76, 0xa0, 0x00), 0)).toBe(-118.625);
  expect(ibmFloat(Uint8Array.of(0x41, 0x10, 0x00, 0x00), 0)).toBe(1);
  expect(ibmFloat(new Uint8Array(4), 0)).toBe(0);
});

test("a message of edition 1 beyond 8 MB counts its length in 120s", async () => {
  // One of 2400 × 1801 values of 16 bits made of a small one: section 4 says how far the last 120 octets are not filled.
  const small = smallFile("simple1_16").bytes;
  const [ni, nj] = [2400, 1801];
  const productLength = ((small[8] as number) << 16) | ((small[9] as number) << 8) | (small[10] as number);
  const gridAt = 8 + productLength;
  const dataAt = gridAt + 32;
  const total = dataAt + 11 + 2 * ni * nj + 1 + 4;
  const bytes = new Uint8Array(total);
  bytes.set(small.subarray(0, dataAt + 11));
  const view = new DataView(bytes.buffer);
  const set24 = (at: number, value: number): void => {
    bytes[at] = value >> 16;
    view.setUint16(at + 1, value & 0xffff);
  };
  view.setUint16(gridAt + 6, ni);
  view.setUint16(gridAt + 8, nj);
  set24(gridAt + 20, 359_850);
  view.setUint16(gridAt + 23, 150);
  // Total length = 120 · n − (length in section 4) + 4.
  const blocks = Math.ceil((total - 4) / 120);
  set24(4, 0x80_0000 | blocks);
  set24(dataAt, 120 * blocks + 4 - total);
  view.setUint16(dataAt + 11 + 2 * (ni * nj - 1), 1000);
  bytes.set([0x37, 0x37, 0x37, 0x37], total - 4);
  const file = await openGrib(memorySource("large.grib", bytes), LIBRARIES, []);
  expect(file.contents.notes).toEqual([]);
  const [field] = file.contents.fields;
  expect([field?.grid.lat.length, field?.grid.lon.length]).toEqual([nj, ni]);
  const { data } = await file.read(field?.key ?? "", { times: [0, 1], rows: [0, 1] });
  const [first, last] = [data[0] as number, data.at(-1) as number];
  // The south-eastern corner is the file's last value: X = 1000, all others 0; E as the small file has it.
  const scale = 2 ** -((bytes[dataAt + 5] as number) & 0x7f);
  expect(last - first).toBe(1000 * scale);
});
