import { QUANTITIES, type Quantity } from "../../field/quantity.ts";
import { acceptedSpellings, type Conversion, conversion, kindsOf, type UnitKind } from "../../units/units.ts";
import type { Correction } from "../dataset.ts";
import type { StoredVariable } from "../variable-store.ts";
import { textOf } from "./attributes.ts";

/** What a variable was taken for, and how its numbers become the core's. */
export interface Recognition {
  readonly quantity: Quantity | null;
  readonly why: string;
  readonly unitsInFile: string;
  readonly conversion: Conversion;
}
/** A variable that is known but has units that are not. */
export interface UnknownUnits {
  readonly refused: string;
}

const KINDS: Readonly<Record<Quantity, readonly UnitKind[]>> = {
  geopotential_height: ["height", "geopotential"],
  eastward_wind: ["wind"],
  northward_wind: ["wind"],
  air_temperature: ["temperature"],
};
const STANDARD_NAMES: Readonly<Record<string, Quantity>> = {
  geopotential_height: "geopotential_height",
  geopotential: "geopotential_height",
  eastward_wind: "eastward_wind",
  northward_wind: "northward_wind",
  air_temperature: "air_temperature",
};
/** Short names that files use, common practice; they count only with fitting units. A pressure may follow: z500, u_250. */
const SHORT_NAMES: readonly (readonly [RegExp, Quantity])[] = [
  [
    /^(z|gh|hgt|height|zg|phi|geopotential|geopotential_height|hgtprs|z_gds\d_isbl|gp|geopoth)(_?\d{2,4})?(hpa|mb)?$/i,
    "geopotential_height",
  ],
  [/^(u|ua|uwnd|ugrd|ugrdprs|uwind|u_wind|u_component_of_wind)(_?\d{2,4})?(hpa|mb)?$/i, "eastward_wind"],
  [/^(v|va|vwnd|vgrd|vgrdprs|vwind|v_wind|v_component_of_wind)(_?\d{2,4})?(hpa|mb)?$/i, "northward_wind"],
  [/^(t|ta|air|tmp|temp|tmpprs|temperature)(_?\d{2,4})?(hpa|mb)?$/i, "air_temperature"],
];

function conversionFor(quantity: Quantity, units: string): Conversion | null {
  for (const kind of KINDS[quantity]) {
    const found = conversion(kind, units);
    if (found !== null) return found;
  }
  return null;
}

function refusal(variable: StoredVariable, quantity: Quantity, units: string): UnknownUnits {
  const accepted = KINDS[quantity].map(acceptedSpellings).join(", ");
  const stated = units === "" ? "no units are stated" : `units "${units}" are not known`;
  return {
    refused: `${variable.name} is ${QUANTITIES[quantity].title.toLowerCase()}, but ${stated}. Known are: ${accepted}. Say which they are in the files panel.`,
  };
}

/** Recognise by what the user said, else by CF standard name, else by units and a common short name. */
export function recognition(variable: StoredVariable, correction: Correction | undefined): Recognition | UnknownUnits {
  const units = correction?.units ?? textOf(variable.attributes, "units") ?? "";
  const unitsInFile = textOf(variable.attributes, "units") ?? "";
  const known = (quantity: Quantity, why: string): Recognition | UnknownUnits => {
    const found = conversionFor(quantity, units);
    if (found === null) return refusal(variable, quantity, units);
    const turned =
      conversion("geopotential", units) !== null && quantity === "geopotential_height"
        ? "; divided by g to give height"
        : "";
    const said = correction?.units === undefined ? "" : `; you said its units are ${units}`;
    return { quantity, why: `${why}${turned}${said}`, unitsInFile, conversion: found };
  };
  if (correction?.quantity !== undefined) return known(correction.quantity, "you said so");
  const standard = textOf(variable.attributes, "standard_name") ?? "";
  const byStandard = Object.hasOwn(STANDARD_NAMES, standard) ? STANDARD_NAMES[standard] : undefined;
  if (byStandard !== undefined) return known(byStandard, `standard name ${standard}`);
  if (standard === "") {
    const byName = SHORT_NAMES.find(([pattern]) => pattern.test(variable.name))?.[1];
    if (byName !== undefined && conversionFor(byName, units) !== null)
      return known(byName, `name ${variable.name} with units ${units}`);
  }
  const plain = kindsOf(units);
  return {
    quantity: null,
    why:
      plain.length > 0
        ? `neither its standard name nor its name is known; its units ${units} are`
        : "neither its standard name nor its name is known",
    unitsInFile,
    conversion: { units: unitsInFile, factor: 1, offset: 0 },
  };
}
