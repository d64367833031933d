import { readFileSync } from "node:fs";
import { inflateSync } from "node:zlib";
import { LIBRARIES } from "../../../../app/codecs/libraries.ts";
import { memorySource } from "../../../../core/formats/memory-source.ts";
import { openFile } from "../../../../core/formats/open-file.ts";
import { type Cube, dailySteps } from "../run-diagnostic.ts";

/** The reference script's 400 days: whole-number noise summed over boxes, the same to the last bit. */
export function inventedCube(): Cube {
  const [days, nLat, nLon] = [400, 37, 72];
  let wide = days + 12;
  let x = 12345;
  let s = new Float64Array(wide * nLat * nLon).map(() => {
    x = (Math.imul(1664525, x) + 1013904223) >>> 0;
    return (x >>> 20) - 2048;
  });
  const cells = nLat * nLon;
  const summed = (from: (t: number, j: number, i: number) => number, nTime: number): Float64Array<ArrayBuffer> => {
    const out = new Float64Array(nTime * cells);
    for (let t = 0, at = 0; t < nTime; t++)
      for (let j = 0; j < nLat; j++) for (let i = 0; i < nLon; i++) out[at++] = from(t, j, i);
    return out;
  };
  const reach = (n: number): number[] => Array.from({ length: 2 * n + 1 }, (_, k) => k - n);
  for (let pass = 0; pass < 2; pass++) {
    const a = s;
    const along = summed(
      (t, j, i) => reach(4).reduce((sum, k) => sum + a[t * cells + j * nLon + ((i + k + nLon) % nLon)], 0),
      wide,
    );
    const across = summed(
      (t, j, i) =>
        reach(2).reduce((sum, k) => sum + along[t * cells + Math.min(nLat - 1, Math.max(0, j + k)) * nLon + i], 0),
      wide,
    );
    wide -= 6;
    s = summed((t, j, i) => {
      let sum = 0;
      for (let k = 0; k < 7; k++) sum += across[(t + k) * cells + j * nLon + i];
      return sum;
    }, wide);
  }
  const lat = Float64Array.from({ length: nLat }, (_, j) => -90 + 5 * j);
  const lon = Float64Array.from({ length: nLon }, (_, i) => 5 * i);
  const values = s.map((sum, at) => 5850 - 7 * Math.abs(lat[Math.floor(at / nLon) % nLat]) + sum / 24576);
  return { values, lat, lon, steps: dailySteps(days, 11_000), levels: Float64Array.of(500) };
}

/** The sample case at 500 hPa, as the project reads it. */
export async function sampleCube(): Promise<Cube> {
  const url = new URL("../../../../sample-data/invented-winter.nc", import.meta.url);
  const bytes = readFileSync(url);
  const file = await openFile(memorySource("invented-winter.nc", new Uint8Array(bytes)), LIBRARIES);
  const field = file.contents.fields.find(({ quantity }) => quantity === "geopotential_height");
  if (field === undefined) throw new Error("The sample case has no heights");
  const levels = [field.levels?.indexOf(500) ?? -1];
  const { data } = await file.read(field.key, { times: [0, 60], rows: [0, field.grid.lat.length], levels });
  return {
    values: data,
    lat: field.grid.lat,
    lon: field.grid.lon,
    steps: field.steps,
    levels: Float64Array.of(500),
  };
}

/** Flags of the reference script: one bit each, deflated. */
export function unpacked(text: string, size: number): Uint8Array {
  const bits = inflateSync(Buffer.from(text, "base64"));
  return Uint8Array.from({ length: size }, (_, i) => (bits[i >> 3] >> (i & 7)) & 1);
}
