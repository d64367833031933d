import { kernelExports } from "../../wasm/kernel-module.ts";
import type { Decoding } from "../cf/decoding.ts";
import { KERNEL } from "./kernel.generated.ts";

interface Exports {
  readonly memory: WebAssembly.Memory;
  float32: Decode;
  int16: Decode;
}
type Decode = (
  from: number,
  into: number,
  count: number,
  a: number,
  b: number,
  scale: number,
  offset: number,
  isPacked: number,
) => void;

const PAGE = 65_536;
/** The module's own data lie below. */
const GROUND = PAGE;
/** Values that go through at a time: small enough for the processor's cache. */
const BLOCK = 32 * 1024;

interface Kernel {
  readonly exports: Exports;
  readonly bytes: Uint8Array;
  readonly numbers: Float64Array;
}
let kernel: Kernel | null | undefined;

function readyKernel(): Kernel | null {
  if (kernel !== undefined) return kernel;
  const exports = kernelExports<Exports>(KERNEL);
  if (exports === null) {
    kernel = null;
    return null;
  }
  const { memory } = exports;
  const pages = Math.ceil((GROUND + 12 * BLOCK) / PAGE) - memory.buffer.byteLength / PAGE;
  if (pages > 0) memory.grow(pages);
  kernel = {
    exports,
    bytes: new Uint8Array(memory.buffer, GROUND, 4 * BLOCK),
    numbers: new Float64Array(memory.buffer, GROUND + 4 * BLOCK, BLOCK),
  };
  return kernel;
}

/** True if `decodeBigEndian` can do this: shorts or floats, at most two missing values, no valid range. */
export function isDecodable(type: string, how: Decoding): type is "int16" | "float32" {
  return (
    (type === "int16" || type === "float32") &&
    how.missing.length <= 2 &&
    how.wrap === 0 &&
    how.least === Number.NEGATIVE_INFINITY &&
    how.most === Number.POSITIVE_INFINITY &&
    readyKernel() !== null
  );
}

/**
 * Big-endian numbers of a file → values in the core's units, NaN where missing, in one pass.
 *
 * @param raw Bytes as they stand in the file. Not modified.
 * @param out Takes all values that `raw` holds, from `into` on.
 */
export function decodeBigEndian(
  raw: Uint8Array,
  type: "int16" | "float32",
  how: Decoding,
  out: Float64Array,
  into: number,
): void {
  const ready = readyKernel();
  if (ready === null) return;
  const { exports, bytes, numbers } = ready;
  const size = type === "int16" ? 2 : 4;
  const [a = Number.NaN, b = Number.NaN] = how.missing;
  const isPacked = how.scale === 1 && how.offset === 0 ? 0 : 1;
  const total = raw.length / size;
  for (let done = 0; done < total; done += BLOCK) {
    const here = Math.min(BLOCK, total - done);
    bytes.set(raw.subarray(done * size, (done + here) * size));
    exports[type](GROUND, GROUND + 4 * BLOCK, here, a, b, how.scale, how.offset, isPacked);
    out.set(here === BLOCK ? numbers : numbers.subarray(0, here), into + done);
  }
}
