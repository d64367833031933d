// A twenty-year daily record, 2.5°, invented by a cheap formula: float32, about 300 MB, written step by step.
import { once } from "node:events";
import { createWriteStream } from "node:fs";

const DAYS = 7305;
const N_LAT = 73;
const N_LON = 144;

function header(begins) {
  const parts = [];
  const u32 = (n) => {
    const b = Buffer.alloc(4);
    b.writeUInt32BE(n >>> 0);
    parts.push(b);
  };
  const text = (s) => {
    const b = Buffer.from(s);
    u32(b.length);
    parts.push(b, Buffer.alloc((4 - (b.length % 4)) % 4));
  };
  const attributes = (pairs) => {
    u32(12);
    u32(pairs.length);
    for (const [name, value] of pairs) {
      text(name);
      u32(2);
      text(value);
    }
  };
  parts.push(Buffer.from([0x43, 0x44, 0x46, 2]));
  u32(0);
  u32(10);
  u32(4);
  for (const [name, length] of [
    ["time", DAYS],
    ["level", 1],
    ["latitude", N_LAT],
    ["longitude", N_LON],
  ]) {
    text(name);
    u32(length);
  }
  attributes([["comment", "invented, for timing alone"]]);
  u32(11);
  u32(5);
  const variables = [
    ["time", [0], 6, DAYS * 8, [["units", "days since 2001-01-01 00:00:00"]]],
    [
      "level",
      [1],
      6,
      8,
      [
        ["units", "hPa"],
        ["standard_name", "air_pressure"],
      ],
    ],
    ["latitude", [2], 6, N_LAT * 8, [["units", "degrees_north"]]],
    ["longitude", [3], 6, N_LON * 8, [["units", "degrees_east"]]],
    [
      "z",
      [0, 1, 2, 3],
      5,
      DAYS * N_LAT * N_LON * 4,
      [
        ["units", "m"],
        ["standard_name", "geopotential_height"],
      ],
    ],
  ];
  variables.forEach(([name, dims, type, bytes, pairs], i) => {
    text(name);
    u32(dims.length);
    for (const dim of dims) u32(dim);
    attributes(pairs);
    u32(type);
    u32(bytes);
    u32(0);
    u32(begins[i]);
  });
  return { bytes: Buffer.concat(parts), sizes: variables.map((variable) => variable[3]) };
}

const float64 = (values) => {
  const b = Buffer.alloc(8 * values.length);
  values.forEach((value, i) => {
    b.writeDoubleBE(value, 8 * i);
  });
  return b;
};

export async function makeRecord(path) {
  const { bytes, sizes } = header([0, 0, 0, 0, 0]);
  let at = bytes.length;
  const begins = sizes.map((size) => {
    at += size;
    return at - size;
  });
  const stream = createWriteStream(path);
  stream.write(header(begins).bytes);
  stream.write(float64(Array.from({ length: DAYS }, (_, i) => i)));
  stream.write(float64([500]));
  stream.write(float64(Array.from({ length: N_LAT }, (_, j) => -90 + 2.5 * j)));
  stream.write(float64(Array.from({ length: N_LON }, (_, i) => 2.5 * i)));
  let noise = 1;
  for (let t = 0; t < DAYS; t++) {
    const step = Buffer.alloc(N_LAT * N_LON * 4);
    for (let j = 0; j < N_LAT; j++) {
      const cos = Math.cos(((-90 + 2.5 * j) * Math.PI) / 180);
      const mean = 5100 + 700 * cos * cos;
      const phases = [
        0.6 * Math.sin(t / 40) + 1,
        -0.05 * t + 0.3 * Math.sin(t / 9),
        0.2 * t,
        0.35 * t,
        0.5 * t,
        0.62 * t,
      ];
      for (let i = 0; i < N_LON; i++) {
        noise = (Math.imul(noise, 1664525) + 1013904223) | 0;
        let x = mean + (noise / 2 ** 31) * 8 * cos;
        const l = (i * 2 * Math.PI) / N_LON;
        for (let k = 1; k <= 6; k++) x += cos * (95 - 12 * k) * Math.cos(k * l - phases[k - 1]);
        step.writeFloatBE(x, 4 * (j * N_LON + i));
      }
    }
    if (!stream.write(step)) await once(stream, "drain");
  }
  stream.end();
  await once(stream, "close");
}
