import { readFileSync } from "node:fs";
import { memorySource } from "../../../core/formats/memory-source.ts";
import { classicFile, type WrittenFile, type WrittenVariable } from "../../../core/formats/netcdf/write.ts";

/** The bytes of a written file, in one piece. */
export function bytesOf(file: WrittenFile): Uint8Array {
  return Uint8Array.from(Buffer.concat([...classicFile(file)]));
}

export function writtenSource(file: WrittenFile, name = "made.nc") {
  return memorySource(name, bytesOf(file));
}

/** A file beside the tests. */
export function referenceBytes(name: string): Uint8Array {
  return Uint8Array.from(readFileSync(new URL(`netcdf/reference/${name}`, import.meta.url)));
}

type Change = Partial<WrittenVariable>;

/** A small file of one field: 2 times, 2 levels, 3 rows, 4 columns; `changes` replace variables by name. */
export function smallFile(changes: Readonly<Record<string, Change>> = {}): WrittenFile {
  const plain: WrittenVariable[] = [
    {
      name: "time",
      dims: ["time"],
      attributes: { units: "hours since 2001-02-09 00:00:00", standard_name: "time" },
      data: Float64Array.of(0, 24),
    },
    { name: "lev", dims: ["lev"], attributes: { units: "hPa" }, data: Float32Array.of(250, 500) },
    { name: "lat", dims: ["lat"], attributes: { units: "degrees_north" }, data: Float32Array.of(-45, 0, 45) },
    { name: "lon", dims: ["lon"], attributes: { units: "degrees_east" }, data: Float32Array.of(0, 90, 180, 270) },
    {
      name: "z",
      dims: ["time", "lev", "lat", "lon"],
      attributes: { units: "gpm", standard_name: "geopotential_height", long_name: "height" },
      data: Float32Array.from({ length: 48 }, (_, i) => i),
    },
  ];
  return {
    dimensions: { time: 2, lev: 2, lat: 3, lon: 4 },
    attributes: { title: "small", history: "made for a test" },
    variables: plain.map((variable) => ({ ...variable, ...changes[variable.name] })),
  };
}
