import type { ResultVariable } from "../diagnostics/entry.ts";
import { reasonCode } from "../field/reasons.ts";

const MISSING = reasonCode("missing");

/** Reason code of each number; a NaN that no reason was given for is missing data. */
export function reasonsOf({ data, reasons }: ResultVariable): Uint8Array {
  // A plain loop: TypedArray.from with a function is twenty times slower, and these are the longest arrays there are.
  const codes = reasons === undefined ? new Uint8Array(data.length) : reasons.slice();
  for (let i = 0; i < data.length; i++) if (codes[i] === 0 && Number.isNaN(data[i])) codes[i] = MISSING;
  return codes;
}
