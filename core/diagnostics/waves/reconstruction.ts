import { RADIANS_PER_DEGREE } from "../../constants.ts";
import { realTransform } from "../../transforms/fourier/fourier.ts";
import type { Coordinate, ResultVariable } from "../entry.ts";
import type { WaveFrame } from "./wave-frame.ts";

/** Values turned back at a time, so that only the result itself is as long as the record. */
const BLOCK = 1 << 18;

/** x = Σ over the chosen waves of A_k cos k(λ − λ_k), wave 0 being the zonal mean, on the grid's longitudes. */
export function reconstructionVariable(
  frame: WaveFrame,
  c: Float64Array,
): { variable: ResultVariable; longitude: Coordinate } {
  const { choice, nLon, series } = frame;
  const { lon } = series.grid;
  const chosen = choice.reconstruct ?? [];
  const kept = choice.most + 1;
  const rows = c.length / (2 * kept);
  const start = lon[0] * RADIANS_PER_DEGREE;
  const cos = Float64Array.from({ length: kept }, (_, k) => Math.cos(k * start));
  const sin = Float64Array.from({ length: kept }, (_, k) => Math.sin(k * start));
  const each = Math.max(1, Math.min(rows, Math.floor(BLOCK / nLon)));
  const out = frame.array(rows * nLon);
  const reasons = new Uint8Array(out.length);
  const turned = new Float64Array(each * kept * 2);
  const values = new Float64Array(each * nLon);
  const inverse = realTransform(nLon);
  for (let from = 0; from < rows; from += each) {
    const count = Math.min(each, rows - from);
    for (let r = 0; r < count; r++) {
      for (const k of chosen) {
        const i = 2 * (r * kept + k);
        const re = c[2 * from * kept + i];
        const im = c[2 * from * kept + i + 1];
        // The transform counts longitude from the first column.
        turned[i] = re * cos[k] - im * sin[k];
        turned[i + 1] = re * sin[k] + im * cos[k];
      }
    }
    inverse.inverse(turned.subarray(0, count * kept * 2), count, values.subarray(0, count * nLon), kept);
    out.set(values.subarray(0, count * nLon), from * nLon);
    for (let r = 0; r < count; r++)
      if (Number.isNaN(values[r * nLon]))
        reasons.fill(frame.absence(from + r, choice.ofAnomaly), (from + r) * nLon, (from + r + 1) * nLon);
  }
  const dims = ["time", "level", "row", "longitude"];
  return {
    variable: frame.variable("reconstruction", `Field of waves ${chosen.join(", ")}`, series.units, dims, out, reasons),
    longitude: {
      name: "longitude",
      values: lon.slice(),
      units: "degrees_east",
      attributes: { standard_name: "longitude" },
    },
  };
}
