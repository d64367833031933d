import { blocking } from "../diagnostics/blocking.ts";
import { climatology } from "../diagnostics/climatology.ts";
import type { Diagnostic } from "../diagnostics/entry.ts";
import { localWaveActivity } from "../diagnostics/local-wave-activity.ts";
import { zonalWaves } from "../diagnostics/zonal-waves.ts";
import { DataError } from "../errors.ts";
import { nearestWord } from "./nearest-word.ts";

/** Every diagnostic there is. Forms, help, method cards, the recipe's schema and its checks are made from this list. */
export const CATALOGUE: readonly Diagnostic[] = [zonalWaves, climatology, blocking, localWaveActivity];

/** @throws NotFoundError naming the nearest id. */
export function diagnosticOf(id: string, catalogue: readonly Diagnostic[] = CATALOGUE): Diagnostic {
  const found = catalogue.find((diagnostic) => diagnostic.id === id);
  if (found !== undefined) return found;
  const ids = catalogue.map((diagnostic) => diagnostic.id);
  const near = nearestWord(id, ids);
  const hint = near === null ? `there are: ${ids.join(", ")}` : `did you mean ${near}?`;
  throw new DataError("NotFoundError", `No diagnostic is named ${JSON.stringify(id)}; ${hint}`);
}
