import type { Quantity } from "../../field/quantity.ts";
import type { GribEntry } from "./grib-index.ts";

/** What a parameter is called here. */
export interface Parameter {
  readonly variable: string;
  readonly longName: string;
  /** As the code tables give them; empty where they are not known here. */
  readonly units: string;
  readonly quantity: Quantity | null;
  /** How it is named in the file, in words. */
  readonly code: string;
}

type Row = readonly [variable: string, longName: string, units: string, quantity?: Quantity];

/** What is met on pressure levels, once for all tables. */
const KNOWN = {
  z: ["geopotential", "Geopotential", "m2 s-2", "geopotential_height"],
  gh: ["geopotential_height", "Geopotential height", "gpm", "geopotential_height"],
  t: ["air_temperature", "Temperature", "K", "air_temperature"],
  u: ["eastward_wind", "U component of wind", "m s-1", "eastward_wind"],
  v: ["northward_wind", "V component of wind", "m s-1", "northward_wind"],
  vo: ["relative_vorticity", "Relative vorticity", "s-1"],
  d: ["divergence", "Divergence", "s-1"],
  absv: ["absolute_vorticity", "Absolute vorticity", "s-1"],
  psi: ["streamfunction", "Stream function", "m2 s-1"],
  chi: ["velocity_potential", "Velocity potential", "m2 s-1"],
  pv: ["potential_vorticity", "Potential vorticity", "K m2 kg-1 s-1"],
  w: ["vertical_pressure_velocity", "Vertical velocity (pressure)", "Pa s-1"],
  q: ["specific_humidity", "Specific humidity", "kg kg-1"],
  r: ["relative_humidity", "Relative humidity", "%"],
} as const satisfies Readonly<Record<string, Row>>;
type Short = keyof typeof KNOWN;

/** FM 92 GRIB edition 2, code tables 4.1 and 4.2: discipline.category.number. */
const EDITION_2: Readonly<Record<string, Short>> = {
  "0.0.0": "t",
  "0.1.0": "q",
  "0.1.1": "r",
  "0.2.2": "u",
  "0.2.3": "v",
  "0.2.4": "psi",
  "0.2.5": "chi",
  "0.2.8": "w",
  "0.2.10": "absv",
  "0.2.12": "vo",
  "0.2.13": "d",
  "0.2.14": "pv",
  "0.3.4": "z",
  "0.3.5": "gh",
};

/** FM 92 GRIB edition 1, code table 2: the parameters 1 … 127 that all centres share. */
const WMO: Readonly<Record<number, Short>> = {
  4: "pv",
  6: "z",
  7: "gh",
  11: "t",
  33: "u",
  34: "v",
  35: "psi",
  36: "chi",
  39: "w",
  41: "absv",
  43: "vo",
  44: "d",
  51: "q",
  52: "r",
};

/** ECMWF's local table 128. */
const ECMWF_128: Readonly<Record<number, Short>> = {
  1: "psi",
  2: "chi",
  60: "pv",
  129: "z",
  130: "t",
  131: "u",
  132: "v",
  133: "q",
  135: "w",
  138: "vo",
  155: "d",
  156: "gh",
  157: "r",
};

export const ECMWF = 98;
const JMA = 34;

function edition1Short(centre: number, table: number, parameter: number): Short | undefined {
  if (centre === ECMWF && table >= 128) return table === 128 ? ECMWF_128[parameter] : undefined;
  // JMA's own table 200 keeps the shared parameters under the same numbers.
  const isShared = table < 128 || (centre === JMA && table === 200);
  return isShared && parameter < 128 ? WMO[parameter] : undefined;
}

/** A name for every parameter; a plain number where the tables here do not have it. */
export function parameterOf({
  edition,
  centre,
  parameter,
}: Pick<GribEntry, "edition" | "centre" | "parameter">): Parameter {
  const [first = 0, second = 0, third = 0] = parameter;
  const code =
    edition === 1
      ? `parameter ${second} of table ${first}`
      : `discipline ${first}, category ${second}, number ${third}`;
  const short = edition === 1 ? edition1Short(centre, first, second) : EDITION_2[parameter.join(".")];
  if (short !== undefined) {
    const [variable, longName, units, quantity]: Row = KNOWN[short];
    return { variable, longName, units, quantity: quantity ?? null, code };
  }
  // Local numbers mean different things at each centre.
  const isLocal = edition === 1 ? first >= 128 || second >= 128 : parameter.some((number) => number >= 192);
  const variable = `parameter_${parameter.join("_")}${isLocal ? `_centre_${centre}` : ""}`;
  return {
    variable,
    longName: `GRIB ${code}${isLocal ? ` of centre ${centre}` : ""}`,
    units: "",
    quantity: null,
    code,
  };
}
