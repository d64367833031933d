import { EARTH_RADIUS, GAS_CONSTANT_DRY, STANDARD_GRAVITY } from "../../core/constants.ts";
import type { WrittenFile, WrittenVariable } from "../../core/formats/netcdf/write.ts";
import { legendreTable, place } from "../../core/transforms/sphere/legendre.ts";
import { synthesis } from "../../core/transforms/sphere/spherical-transform.ts";
import { BarotropicModel } from "./barotropic.ts";
import type { InventedDay } from "./invention.ts";

const T = 42;
const N_LON = 144;
const N_LAT = 73;
const LEVELS = [850, 500, 250];
/** Global mean height (gpm) and temperature (K) of each level: round figures near the ISO 2533 atmosphere. */
const MEAN_HEIGHT = [1480, 5620, 10_480];
const MEAN_TEMPERATURE = [281, 255, 224];
/** How the waves grow and lean with height, by ln(500/p): amplitude 1 + 0.75 ln(500/p), ridge 9° further west per unit. */
const GROWTH = 0.75;
const LEAN = 9;

/** Field of waves turned west by `degrees` and scaled, plus its derivative by longitude per degree. */
function leaning(c: Float64Array, degrees: number): { turned: Float64Array; slope: Float64Array } {
  const turned = new Float64Array(c.length);
  const slope = new Float64Array(c.length);
  for (let m = 0; m <= T; m++) {
    const angle = (m * degrees * Math.PI) / 180;
    const [cos, sin] = [Math.cos(angle), Math.sin(angle)];
    for (let n = m; n <= T; n++) {
      const i = 2 * place(m, n, T);
      const re = (c[i] as number) * cos - (c[i + 1] as number) * sin;
      const im = (c[i] as number) * sin + (c[i + 1] as number) * cos;
      turned[i] = re;
      turned[i + 1] = im;
      slope[i] = (-m * im * Math.PI) / 180;
      slope[i + 1] = (m * re * Math.PI) / 180;
    }
  }
  return { turned, slope };
}

function packed(
  name: string,
  dims: readonly string[],
  values: Float64Array,
  attributes: Record<string, string>,
): WrittenVariable {
  let [low, high] = [Number.POSITIVE_INFINITY, Number.NEGATIVE_INFINITY];
  for (const value of values) {
    low = Math.min(low, value);
    high = Math.max(high, value);
  }
  const scale = (high - low) / 65_000;
  const offset = (high + low) / 2;
  return {
    name,
    dims,
    attributes: { ...attributes, scale_factor: scale, add_offset: offset, _FillValue: Int16Array.of(-32_768) },
    data: Int16Array.from(values, (value) => Math.round((value - offset) / scale)),
  };
}

/** The sample file: height and temperature at three levels, wind at 500 hPa, once a day. */
export function sampleFile(days: readonly InventedDay[]): WrittenFile {
  const model = new BarotropicModel(T, 64, 128, 0);
  // South → north; a hair off the poles, where cos φ would divide by nothing.
  const lat = Float64Array.from({ length: N_LAT }, (_, j) => -90 + 2.5 * j);
  const sines = lat.map((value) => Math.sin((Math.max(-89.999, Math.min(89.999, value)) * Math.PI) / 180));
  const table = legendreTable(sines, T);
  const grid = (c: Float64Array, basis: Float64Array = table.p) => synthesis(c, basis, T, N_LAT, N_LON);
  const cell = N_LAT * N_LON;
  const n = days.length;
  const z = new Float64Array(n * 3 * cell);
  const t = new Float64Array(n * 3 * cell);
  const u = new Float64Array(n * cell);
  const v = new Float64Array(n * cell);
  days.forEach(({ zeta }, day) => {
    const psi = model.streamfunction(zeta);
    const uCos = grid(psi, table.h);
    const vCos = grid(model.alongLongitude(psi));
    const kinetic = new Float64Array(cell);
    for (let j = 0; j < N_LAT; j++) {
      const cos = Math.sqrt(1 - (sines[j] as number) ** 2);
      for (let i = 0; i < N_LON; i++) {
        const at = j * N_LON + i;
        u[day * cell + at] = -(uCos[at] as number) / EARTH_RADIUS / cos;
        v[day * cell + at] = (vCos[at] as number) / EARTH_RADIUS / cos;
        kinetic[at] = ((u[day * cell + at] as number) ** 2 + (v[day * cell + at] as number) ** 2) / 2;
      }
    }
    const head = model.balancedHead(zeta);
    LEVELS.forEach((p, level) => {
      const above = Math.log(500 / p);
      const growth = 1 + GROWTH * above;
      const { turned, slope } = leaning(head, LEAN * above);
      const height = grid(turned);
      const leaningHeight = grid(slope);
      for (let at = 0; at < cell; at++) {
        const k = kinetic[at] as number;
        const departure = ((height[at] as number) - k) / STANDARD_GRAVITY;
        // Hydrostatic: T = −(g/R) ∂Z/∂ln p, with ∂/∂ln p of growth and lean.
        const slant = GROWTH * departure + (growth * LEAN * (leaningHeight[at] as number)) / STANDARD_GRAVITY;
        z[(day * 3 + level) * cell + at] = (MEAN_HEIGHT[level] as number) + growth * departure;
        t[(day * 3 + level) * cell + at] =
          (MEAN_TEMPERATURE[level] as number) + (STANDARD_GRAVITY / GAS_CONSTANT_DRY) * slant;
      }
    });
  });
  const maps = ["time", "level", "latitude", "longitude"];
  const winds = ["time", "latitude", "longitude"];
  const axis = (name: string, data: Float64Array, attributes: Record<string, string>): WrittenVariable => ({
    name,
    dims: [name],
    data,
    attributes,
  });
  return {
    dimensions: { time: n, level: 3, latitude: N_LAT, longitude: N_LON },
    attributes: {
      Conventions: "CF-1.11",
      title: "An invented winter",
      comment:
        "INVENTED DATA. No day of this record ever happened. Made by a model of the barotropic vorticity equation on the sphere, to show how Isohypse works; evidence for nothing.",
      source: "sample-data/make.ts, Isohypse",
      references: "sample-data/README.md",
    },
    variables: [
      axis(
        "time",
        Float64Array.from({ length: n }, (_, i) => i),
        { standard_name: "time", units: "days since 2001-01-01 00:00:00", calendar: "standard", axis: "T" },
      ),
      axis("level", Float64Array.from(LEVELS), {
        standard_name: "air_pressure",
        units: "hPa",
        positive: "down",
        axis: "Z",
      }),
      axis("latitude", lat, { standard_name: "latitude", units: "degrees_north", axis: "Y" }),
      axis(
        "longitude",
        Float64Array.from({ length: N_LON }, (_, i) => 2.5 * i),
        { standard_name: "longitude", units: "degrees_east", axis: "X" },
      ),
      {
        name: "wind_level",
        dims: [],
        data: Float64Array.of(500),
        attributes: { standard_name: "air_pressure", units: "hPa", long_name: "level of the winds" },
      },
      packed("z", maps, z, { standard_name: "geopotential_height", long_name: "geopotential height", units: "m" }),
      packed("t", maps, t, { standard_name: "air_temperature", long_name: "temperature", units: "K" }),
      packed("u", winds, u, {
        standard_name: "eastward_wind",
        long_name: "eastward wind",
        units: "m s-1",
        coordinates: "wind_level",
      }),
      packed("v", winds, v, {
        standard_name: "northward_wind",
        long_name: "northward wind",
        units: "m s-1",
        coordinates: "wind_level",
      }),
    ],
  };
}
