import { DataError } from "../../errors.ts";
import type { FourierKernel } from "./kernel.ts";
import { plainKernel } from "./plain.ts";
import { requireLength } from "./plan.ts";
import { wasmKernel } from "./wasm.ts";

/** Transforms of real rows of one length. Sums are unnormalised: forward, then inverse, multiplies by n. */
export interface RealTransform {
  readonly n: number;
  /** "wasm" or, where that cannot run or was not asked for, "plain". */
  readonly kernel: "wasm" | "plain";
  /**
   * X_k = Σ_j x_j e^{−2πikj/n} for k = 0 … waves − 1.
   *
   * @param x     Shape (rows, n); a NaN makes its own row NaN and no other.
   * @param out   Shape (rows, waves, 2): re, im.
   * @param waves At most ⌊n/2⌋ + 1.
   * @throws ShapeError if a size does not fit.
   */
  forward(x: Float64Array, rows: number, out: Float64Array, waves: number): void;
  /**
   * `forward` of each row's departures from its own first value: sums of heights, which are 50 times their waves, keep that
   * much more of their last digits.
   *
   * @param variance Variance of each row about its mean, (1/n) Σ (x − x̄)², shape (rows).
   * @throws ShapeError if a size does not fit.
   */
  departures(x: Float64Array, rows: number, out: Float64Array, waves: number, variance: Float64Array): void;
  /**
   * x_j = Σ_k c_k e^{2πikj/n} over −n/2 < k ≤ n/2 with c_{−k} = conj c_k, c_k = 0 from `waves` on. Imaginary parts of the mean
   * and of the Nyquist wave are ignored; a Nyquist wave counts once.
   *
   * @param c   Shape (rows, waves, 2).
   * @param out Shape (rows, n).
   * @throws ShapeError if a size does not fit.
   */
  inverse(c: Float64Array, rows: number, out: Float64Array, waves: number): void;
}

/** Transforms of complex rows of one length; unnormalised. */
export interface ComplexTransform {
  readonly n: number;
  readonly kernel: "wasm" | "plain";
  /** Z_k = Σ_j z_j e^{−2πikj/n}; both of shape (rows, n, 2). @throws ShapeError */
  forward(z: Float64Array, rows: number, out: Float64Array): void;
  /** z_j = Σ_k Z_k e^{2πikj/n}; both of shape (rows, n, 2). @throws ShapeError */
  inverse(z: Float64Array, rows: number, out: Float64Array): void;
}

// Tables and scratch memory of a length are kept: a run transforms thousands of rows of one length. Nothing of a row is kept.
const kept = new Map<string, FourierKernel>();

function kernelFor(
  n: number,
  wanted: "wasm" | "plain",
): { readonly kernel: "wasm" | "plain"; readonly run: FourierKernel } {
  requireLength(n);
  const held = kept.get(`${wanted} ${n}`);
  if (held !== undefined) return { kernel: wanted, run: held };
  const wasm = wanted === "wasm" ? wasmKernel(n) : null;
  if (wasm === null && wanted === "wasm") return kernelFor(n, "plain");
  const run = wasm ?? plainKernel(n);
  kept.set(`${wanted} ${n}`, run);
  return { kernel: wanted, run };
}

function requireSize(what: string, array: Float64Array, least: number): void {
  if (array.length < least)
    throw new DataError("ShapeError", `${what} has ${array.length} numbers; ${least} are needed.`);
}

function requireWaves(n: number, waves: number): void {
  const most = Math.floor(n / 2) + 1;
  if (!Number.isInteger(waves) || waves < 1 || waves > most)
    throw new DataError(
      "ShapeError",
      `${waves} waves were asked of rows of ${n}; there are 1 to ${most}, the mean included.`,
    );
}

/**
 * The transform of real rows of `n`, n = 8 … 2880.
 *
 * Lengths whose prime factors are 2, 3 and 5 are fast; a large prime factor p costs p operations per value.
 *
 * @throws ShapeError for another length.
 */
export function realTransform(n: number, wanted: "wasm" | "plain" = "wasm"): RealTransform {
  const { kernel, run } = kernelFor(n, wanted);
  return {
    n,
    kernel,
    forward(x, rows, out, waves) {
      requireWaves(n, waves);
      requireSize("x", x, rows * n);
      requireSize("out", out, 2 * rows * waves);
      run.realForward(x, rows, waves, out);
    },
    departures(x, rows, out, waves, variance) {
      requireWaves(n, waves);
      requireSize("x", x, rows * n);
      requireSize("out", out, 2 * rows * waves);
      requireSize("variance", variance, rows);
      run.departuresForward(x, rows, waves, out, variance);
    },
    inverse(c, rows, out, waves) {
      requireWaves(n, waves);
      requireSize("c", c, 2 * rows * waves);
      requireSize("out", out, rows * n);
      run.realInverse(c, rows, waves, out);
    },
  };
}

/** The transform of complex rows of `n`, n = 8 … 2880. @throws ShapeError for another length. */
export function complexTransform(n: number, wanted: "wasm" | "plain" = "wasm"): ComplexTransform {
  const { kernel, run } = kernelFor(n, wanted);
  const checked = (z: Float64Array, rows: number, out: Float64Array, inverse: boolean): void => {
    requireSize("z", z, 2 * rows * n);
    requireSize("out", out, 2 * rows * n);
    run.complex(z, rows, inverse, out);
  };
  return {
    n,
    kernel,
    forward: (z, rows, out) => checked(z, rows, out, false),
    inverse: (z, rows, out) => checked(z, rows, out, true),
  };
}
