import type { ChartGrid } from "./types.ts";

/** A field on a grid fine enough to be drawn smoothly; rows of one hemisphere or of the whole globe. */
export interface FineField {
  /** (nLat, nLon), south → north, west → east. */
  readonly values: Float32Array;
  readonly nLat: number;
  readonly nLon: number;
  readonly lat0: number;
  readonly dLat: number;
  readonly lon0: number;
  readonly dLon: number;
  readonly closesCircle: boolean;
}

/** Degrees; a finer grid would not be seen. */
const FINE_ENOUGH = 0.8;

/** Weights of the four neighbours at each of `factor` places between two points (Catmull & Rom 1974): the curve goes through every value. */
function cubicWeights(factor: number): Float64Array {
  const out = new Float64Array(4 * factor);
  for (let i = 0; i < factor; i++) {
    const t = i / factor;
    out[4 * i] = ((-t + 2) * t - 1) * t * 0.5;
    out[4 * i + 1] = ((3 * t - 5) * t * t + 2) * 0.5;
    out[4 * i + 2] = ((-3 * t + 4) * t + 1) * t * 0.5;
    out[4 * i + 3] = (t - 1) * t * t * 0.5;
  }
  return out;
}

/** Evenly spaced latitudes within a twentieth of their spacing; Gaussian rows are. */
function spacing(axis: Float64Array): number {
  return axis.length > 1 ? ((axis[axis.length - 1] as number) - (axis[0] as number)) / (axis.length - 1) : 1;
}

/**
 * The field between its points by cubic curves, first along longitude, then along latitude; a missing value stays missing
 * around itself and spreads no further than its neighbours.
 */
export function fineField(grid: ChartGrid, values: Float32Array): FineField {
  const nLat = grid.lat.length;
  const nLon = grid.lon.length;
  const dLat = spacing(grid.lat);
  const dLon = spacing(grid.lon);
  const factorLon = Math.max(1, Math.ceil(dLon / FINE_ENOUGH));
  const factorLat = Math.max(1, Math.ceil(dLat / FINE_ENOUGH));
  const wide = grid.closesCircle ? nLon * factorLon : (nLon - 1) * factorLon + 1;
  const tall = (nLat - 1) * factorLat + 1;
  const common = {
    lat0: grid.lat[0] as number,
    dLat: dLat / factorLat,
    lon0: grid.lon[0] as number,
    dLon: dLon / factorLon,
    closesCircle: grid.closesCircle,
  };
  if (factorLat === 1 && factorLon === 1) return { values, nLat, nLon, ...common };
  const along = new Float32Array(nLat * wide);
  const weightsLon = cubicWeights(factorLon);
  const column = (i: number): number => (grid.closesCircle ? (i + nLon) % nLon : Math.min(nLon - 1, Math.max(0, i)));
  for (let i = 0; i * factorLon < wide; i++) {
    const [a, b, c, d] = [column(i - 1), column(i), column(i + 1), column(i + 2)];
    for (let f = 0; f < factorLon && i * factorLon + f < wide; f++) {
      const [wa, wb, wc, wd] = weightsLon.subarray(4 * f, 4 * f + 4) as unknown as [number, number, number, number];
      for (let r = 0; r < nLat; r++) {
        const from = r * nLon;
        along[r * wide + i * factorLon + f] =
          f === 0
            ? (values[from + b] as number)
            : wa * (values[from + a] as number) +
              wb * (values[from + b] as number) +
              wc * (values[from + c] as number) +
              wd * (values[from + d] as number);
      }
    }
  }
  const out = new Float32Array(tall * wide);
  const weightsLat = cubicWeights(factorLat);
  const row = (r: number): number => Math.min(nLat - 1, Math.max(0, r)) * wide;
  for (let r = 0; r * factorLat < tall; r++) {
    const [a, b, c, d] = [row(r - 1), row(r), row(r + 1), row(r + 2)];
    for (let f = 0; f < factorLat && r * factorLat + f < tall; f++) {
      const [wa, wb, wc, wd] = weightsLat.subarray(4 * f, 4 * f + 4) as unknown as [number, number, number, number];
      const into = (r * factorLat + f) * wide;
      if (f === 0) out.set(along.subarray(b, b + wide), into);
      else
        for (let i = 0; i < wide; i++)
          out[into + i] =
            wa * (along[a + i] as number) +
            wb * (along[b + i] as number) +
            wc * (along[c + i] as number) +
            wd * (along[d + i] as number);
    }
  }
  return { values: out, nLat: tall, nLon: wide, ...common };
}
