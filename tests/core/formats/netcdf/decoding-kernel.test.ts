import { expect, test } from "vitest";
import { type Decoding, decodeInPlace } from "../../../../core/formats/cf/decoding.ts";
import { decodeBigEndian, isDecodable } from "../../../../core/formats/netcdf/decoding-kernel.ts";
import { KERNEL } from "../../../../core/formats/netcdf/kernel.generated.ts";
import { numbersOf } from "../../../../core/formats/netcdf/swap.ts";
import { bytesOfBase64 } from "../../../../core/wasm/base64.ts";
import { compiledKernel, KERNELS } from "../../../../core/wasm/compile.mjs";

const PLAIN: Decoding = {
  missing: [],
  least: Number.NEGATIVE_INFINITY,
  most: Number.POSITIVE_INFINITY,
  wrap: 0,
  scale: 1,
  offset: 0,
};
const WAYS: readonly Decoding[] = [
  PLAIN,
  { ...PLAIN, missing: [-32_767] },
  { ...PLAIN, missing: [Math.fround(1e20), 0] },
  { ...PLAIN, missing: [1, -7], scale: 0.1, offset: 273.15 },
  { ...PLAIN, scale: 1 / 9.80665 },
];

/** Every kind of word: all patterns of 16 bits; as floats NaNs, infinities, zeros of both signs and subnormals are among them. */
function words(count: number): Uint8Array<ArrayBuffer> {
  const bytes = new Uint8Array(count);
  for (let i = 0, x = 1; i < count; i++) {
    x = (Math.imul(x, 1_664_525) + 1_013_904_223) | 0; // Numerical Recipes' quick generator
    bytes[i] = x >>> 24;
  }
  const view = new DataView(bytes.buffer);
  const odd = [0, 0x80000000, 0x7f800000, 0xff800000, 0x7fc00000, 1, 0x60ad78ec, 0x3f800000, 0xc0e00000];
  odd.forEach((word, i) => {
    if (4 * i + 4 <= count) view.setUint32(4 * i, word);
  });
  return bytes;
}

// The oracle is the plain path, itself held against scipy in reader.test.ts; both must give the same bits.
test.each(["int16", "float32"] as const)("%s: the kernel decodes as the plain path, bit for bit", (type) => {
  const size = type === "int16" ? 2 : 4;
  for (const how of WAYS)
    for (const count of [0, 1, 3, 4, 5, 31, 32 * 1024, 32 * 1024 + 3, 100_000]) {
      const raw = words(count * size);
      const kept = raw.slice();
      const out = new Float64Array(count + 2).fill(-1);
      expect(isDecodable(type, how)).toBe(true);
      decodeBigEndian(raw, type, how, out, 1);
      const want = decodeInPlace(Float64Array.from(numbersOf(raw.slice(), type)), how);
      expect(Buffer.from(raw).equals(Buffer.from(kept))).toBe(true);
      expect([out[0], out[count + 1]]).toEqual([-1, -1]);
      for (let i = 0; i < count; i++)
        if (!Object.is(out[i + 1], want[i])) expect([i, out[i + 1]]).toEqual([i, want[i]]);
    }
});

test("what the kernel cannot do is left to the plain path", () => {
  expect(isDecodable("float64", PLAIN)).toBe(false);
  expect(isDecodable("int16", { ...PLAIN, missing: [1, 2, 3] })).toBe(false);
  expect(isDecodable("int16", { ...PLAIN, least: 0 })).toBe(false);
  expect(isDecodable("int16", { ...PLAIN, wrap: 65_536 })).toBe(false);
});

test("the committed kernel is what its source compiles to", async () => {
  expect(Buffer.from(bytesOfBase64(KERNEL)).equals(Buffer.from(await compiledKernel(KERNELS.decoding)))).toBe(true);
});
