import { createHash } from "node:crypto";
import { existsSync, readFileSync } from "node:fs";
import { describe, expect, test } from "vitest";
import { LIBRARIES } from "../../../../app/codecs/libraries.ts";
import type { FieldDescription, OpenFile } from "../../../../core/formats/dataset.ts";
import { openGrib } from "../../../../core/formats/grib/open-grib.ts";
import { memorySource } from "../../../../core/formats/memory-source.ts";
import { dataFile } from "../data-folder.ts";
import { daysOfStamp, type ReferenceMessage } from "./small-files.ts";

interface RealMessage extends Omit<ReferenceMessage, "values"> {
  readonly member: number | null;
  readonly mean: number | null;
  readonly min: number | null;
  readonly max: number | null;
  readonly missing: number;
  /** D of the packing: ecCodes divides by 10 that many times, each time rounding; once is exact to the last bit. */
  readonly decimal: number;
  /** First digits of the SHA-256 of all values, NaN as 9.999e20: doubles for D ≤ 1, else rounded to single precision. */
  readonly digest: string;
  /** At evenly spread places, to single precision. */
  readonly samples: readonly (number | null)[];
}

const REAL = JSON.parse(readFileSync(new URL("reference/real.json", import.meta.url), "utf8")) as Record<
  string,
  readonly RealMessage[]
>;

/** ecCodes' short names and the reader's. Others are known by their level and time alone. */
const NAMES: Readonly<Record<string, string>> = {
  z: "geopotential",
  gh: "geopotential_height",
  t: "air_temperature",
  u: "eastward_wind",
  v: "northward_wind",
  r: "relative_humidity",
  absv: "absolute_vorticity",
  w: "vertical_pressure_velocity",
  q: "specific_humidity",
};

const ALL_DIGITS = 9.999e20;

function digest(values: Float64Array, decimal: number): string {
  const doubles = values.map((value) => (Number.isNaN(value) ? ALL_DIGITS : value));
  const plain = decimal <= 1 ? doubles : Float32Array.from(doubles);
  return createHash("sha256").update(new Uint8Array(plain.buffer)).digest("hex").slice(0, 16);
}

function fieldOf(file: OpenFile, message: RealMessage): FieldDescription {
  const variable = NAMES[message.name];
  const field = file.contents.fields.find((one) => one.variable === variable);
  if (field === undefined) throw new Error(`no field for ${message.name}`);
  return field;
}

async function messageValues(file: OpenFile, message: RealMessage) {
  const field = fieldOf(file, message);
  const time = daysOfStamp(message.date, message.time);
  // Seconds of a day are kept: 2⁻⁴² of a day is far below one.
  const step = field.steps.values.findIndex((days) => Math.abs(days - time) < 1e-6);
  const level = field.levels?.findIndex((hPa) => Math.abs(hPa - message.level) < 1e-9) ?? -1;
  const member = field.members === null ? 0 : field.members.indexOf(message.member ?? 0);
  if (step < 0 || level < 0 || member < 0)
    throw new Error(
      `${field.key}: step ${step}, level ${level}, member ${member} for ${message.name} ${message.level}`,
    );
  return file.read(field.key, { times: [step, step + 1], levels: [level], member });
}

describe("real files against ecCodes 2.28, every message on pressure levels", () => {
  for (const [name, messages] of Object.entries(REAL)) {
    const path = dataFile(name);
    const known = messages.filter((message) => NAMES[message.name] !== undefined);
    if (known.length === 0) continue;
    test.skipIf(!existsSync(path))(`${name}: ${known.length} messages`, async () => {
      // Said to be heights already, geopotentials stay as they are in the file, and all bits can be compared.
      const said = [{ file: name, variable: "geopotential", units: "gpm" }];
      const source = memorySource(name, readFileSync(path));
      const plain = await openGrib(source, LIBRARIES, said);
      const converted = await openGrib(source, LIBRARIES, []);
      for (const message of known) {
        const slab = await messageValues(plain, message);
        const where = `${name}, ${message.name} at ${message.level} hPa, ${message.date} ${message.time}, member ${message.member}`;
        expect(slab.shape, where).toEqual([1, 1, ...message.shape]);
        const { data } = slab;
        message.samples.forEach((value, k) => {
          const i = Math.floor(((k + 0.5) * data.length) / message.samples.length);
          const own = data[i] as number;
          // The sample was rounded to single precision and written with the fewest digits that give it back: 2⁻²⁴ each.
          const limit = Math.abs(value ?? 0) * 2 ** -23;
          const same = value === null ? Number.isNaN(own) : Math.abs(own - value) <= limit;
          if (!same) expect.fail(`${where}: value ${i} is ${own}, not ${value} ± ${limit}`);
        });
        const present = data.filter((value) => !Number.isNaN(value));
        expect(data.length - present.length, where).toBe(message.missing);
        if (message.min !== null && message.max !== null && message.mean !== null) {
          const largest = Math.max(Math.abs(message.min), Math.abs(message.max));
          // 10^−D of ecCodes rounds D times by 2⁻⁵³; a plain sum of n values rounds n times by that of the largest sum.
          const power = message.decimal <= 1 ? 0 : largest * message.decimal * 2 ** -53;
          const least = present.reduce((a, b) => Math.min(a, b));
          const most = present.reduce((a, b) => Math.max(a, b));
          const mean = present.reduce((sum, value) => sum + value, 0) / present.length;
          expect(Math.abs(least - message.min), where).toBeLessThanOrEqual(power);
          expect(Math.abs(most - message.max), where).toBeLessThanOrEqual(power);
          expect(Math.abs(mean - message.mean), where).toBeLessThanOrEqual(power + largest * present.length * 2 ** -53);
        }
        expect(digest(data, message.decimal), where).toBe(message.digest);
        if (message.name === "z") {
          const height = (await messageValues(converted, message)).data;
          // 1/g₀ is rounded once and the product once.
          const i = height.length >> 1;
          const expected = (data[i] as number) / 9.80665;
          expect(Math.abs((height[i] as number) - expected)).toBeLessThanOrEqual(Math.abs(expected) * 2 ** -52);
        }
      }
    });
  }
});
