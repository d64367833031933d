import { kernelExports } from "../../wasm/kernel-module.ts";
import { KERNEL } from "./kernel.generated.ts";
import type { FourierKernel } from "./kernel.ts";
import { innerLength, radices, twiddles } from "./plan.ts";

const PAGE = 65_536;
/** The module's own data lie below; the stub runtime keeps nothing else. */
const GROUND = PAGE;
/** Rows go through in blocks of about this many bytes, so that a block stays in the processor's cache. */
const BLOCK_BYTES = 256 * 1024;

interface Exports {
  readonly memory: WebAssembly.Memory;
  realForward(
    n: number,
    h: number,
    rows: number,
    waves: number,
    factors: number,
    count: number,
    halfTable: number,
    table: number,
    x: number,
    out: number,
    first: number,
    second: number,
  ): void;
  realInverse(
    n: number,
    h: number,
    rows: number,
    waves: number,
    factors: number,
    count: number,
    halfTable: number,
    table: number,
    c: number,
    out: number,
    first: number,
    second: number,
  ): void;
  departures(n: number, rows: number, x: number, variance: number): void;
  complex(
    n: number,
    rows: number,
    inverse: number,
    factors: number,
    count: number,
    table: number,
    z: number,
    out: number,
    first: number,
    second: number,
  ): void;
}

/** The kernel in WebAssembly for rows of `n`, two rows at a time, with a memory of its own; null where it cannot run. */
export function wasmKernel(n: number): FourierKernel | null {
  const exports = kernelExports<Exports>(KERNEL);
  if (exports === null) return null;
  const { memory } = exports;
  const h = innerLength(n);
  const even = h !== n;
  const place = layout(memory);
  const halfFactors = place.numbers(radices(h));
  const halfTable = place.table(twiddles(h));
  const factors = even ? place.numbers(radices(n)) : halfFactors;
  const table = even ? place.table(twiddles(n)) : halfTable;
  const first = place.reserve(32 * n);
  const second = place.reserve(32 * n);
  // An even number of rows per block; the largest row, of complex numbers, has 16 n bytes.
  const block = 2 * Math.max(1, Math.floor(BLOCK_BYTES / (32 * n)));
  const input = place.reserve(16 * n * block);
  const output = place.reserve(16 * n * block);
  const spread = place.reserve(8 * block);
  place.done();
  const view = new Float64Array(memory.buffer);

  /** Feed rows block by block; a last single row goes through beside a row of zeros. */
  function inBlocks(
    x: Float64Array,
    rows: number,
    rowIn: number,
    out: Float64Array,
    rowOut: number,
    run: (rows: number, row: number, here: number) => void,
  ): void {
    for (let row = 0; row < rows; row += block) {
      const here = Math.min(block, rows - row);
      const whole = here + (here % 2);
      view.set(x.subarray(row * rowIn, (row + here) * rowIn), input / 8);
      if (whole > here) view.fill(0, input / 8 + here * rowIn, input / 8 + whole * rowIn);
      run(whole, row, here);
      out.set(view.subarray(output / 8, output / 8 + here * rowOut), row * rowOut);
    }
  }

  const forward = (rows: number, waves: number): void =>
    exports.realForward(
      n,
      h,
      rows,
      waves,
      halfFactors.at,
      halfFactors.count,
      halfTable,
      table,
      input,
      output,
      first,
      second,
    );

  return {
    realForward: (x, rows, waves, out) => inBlocks(x, rows, n, out, 2 * waves, (some) => forward(some, waves)),
    departuresForward: (x, rows, waves, out, variance) =>
      inBlocks(x, rows, n, out, 2 * waves, (some, row, here) => {
        exports.departures(n, some, input, spread);
        variance.set(view.subarray(spread / 8, spread / 8 + here), row);
        forward(some, waves);
      }),
    realInverse: (c, rows, waves, out) =>
      inBlocks(c, rows, 2 * waves, out, n, (some) =>
        exports.realInverse(
          n,
          h,
          some,
          waves,
          halfFactors.at,
          halfFactors.count,
          halfTable,
          table,
          input,
          output,
          first,
          second,
        ),
      ),
    complex: (z, rows, inverse, out) =>
      inBlocks(z, rows, 2 * n, out, 2 * n, (some) =>
        exports.complex(n, some, inverse ? 1 : 0, factors.at, factors.count, table, input, output, first, second),
      ),
  };
}

/** Places in a memory that is grown once, before any view of it is kept: growing takes the old views away. */
function layout(memory: WebAssembly.Memory) {
  let next = GROUND;
  const writes: (() => void)[] = [];
  const reserve = (bytes: number): number => {
    const at = next;
    next += Math.ceil(bytes / 16) * 16;
    return at;
  };
  return {
    reserve,
    numbers(values: readonly number[]) {
      const at = reserve(4 * values.length);
      writes.push(() => new Uint32Array(memory.buffer, at, values.length).set(values));
      return { at, count: values.length };
    },
    table(values: Float64Array) {
      const at = reserve(8 * values.length);
      writes.push(() => new Float64Array(memory.buffer, at, values.length).set(values));
      return at;
    },
    done(): void {
      const pages = Math.ceil(next / PAGE) - memory.buffer.byteLength / PAGE;
      if (pages > 0) memory.grow(pages);
      for (const write of writes) write();
    },
  };
}
