import { ieeeFloat, signed16 } from "./octets.ts";

/** How packed whole numbers X become values: (X · binary + reference) · decimal (FM 92, regulation 92.9.4). */
export interface Scaling {
  /** R. */
  readonly reference: number;
  /** 2^E. */
  readonly binary: number;
  /** 10^−D. */
  readonly decimal: number;
}

/** The reciprocal of an exact power is the nearest double to 10^−D. */
export function powerOfTen(exponent: number): number {
  return exponent < 0 ? 1 / 10 ** -exponent : 10 ** exponent;
}

/** Scaling that section 5 of edition 2 gives in templates 5.0, 5.2, 5.3, 5.40, 5.41 and 5.42 alike. */
export function edition2Scaling(section: Uint8Array): Scaling {
  return {
    reference: ieeeFloat(section, 11),
    binary: 2 ** signed16(section, 15),
    decimal: powerOfTen(-signed16(section, 17)),
  };
}

/** Value where nothing is packed at all: every X is 0. */
export function constantValue({ reference, decimal }: Scaling): number {
  return reference * decimal;
}

/** Apply a scaling to whole numbers. */
export function scaledNumbers(packed: ArrayLike<number>, count: number, scaling: Scaling): Float64Array {
  const { reference, binary, decimal } = scaling;
  const out = new Float64Array(count);
  for (let i = 0; i < count; i++) out[i] = ((packed[i] as number) * binary + reference) * decimal;
  return out;
}
