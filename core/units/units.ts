import { STANDARD_GRAVITY } from "../constants.ts";

/** value in the core's unit = value in the file · factor + offset. */
export interface Conversion {
  readonly units: string;
  readonly factor: number;
  readonly offset: number;
}

/** What kinds of unit the core knows; each has one unit that is used inside. */
export type UnitKind = "height" | "geopotential" | "wind" | "temperature" | "pressure";

const KNOT = 1852 / 3600; // m s⁻¹, by definition of the nautical mile (SI brochure)

/** Spellings, lower case and single-spaced, by kind. An explicit table: what is not in it is refused. */
const TABLE: Readonly<
  Record<
    UnitKind,
    {
      readonly units: string;
      readonly rows: readonly (readonly [spellings: string, factor: number, offset?: number])[];
    }
  >
> = {
  height: {
    units: "gpm",
    rows: [
      [
        "m|meter|meters|metre|metres|gpm|gp m|geopotential meter|geopotential meters|geopotential metre|geopotential metres",
        1,
      ],
      ["dam|gpdam|gpdm|decameter|decameters|decametre|decametres|geopotential decameter|geopotential decametre", 10],
      ["km|kilometer|kilometers|kilometre|kilometres|gpkm", 1000],
    ],
  },
  geopotential: {
    units: "gpm",
    rows: [
      [
        "m2 s-2|m**2 s**-2|m^2 s^-2|m2/s2|m**2/s**2|m^2/s^2|m2 s^-2|m^2/s2|m2.s-2|m s-1 m s-1|j kg-1|j/kg|j kg**-1|j kg^-1",
        1 / STANDARD_GRAVITY,
      ],
    ],
  },
  wind: {
    units: "m s-1",
    rows: [
      [
        "m s-1|m/s|m s**-1|m s^-1|m.s-1|m*s-1|m s^{-1}|meter second-1|meters second-1|meters per second|metres per second|meter/sec|m/sec",
        1,
      ],
      ["kt|kts|knot|knots", KNOT],
      ["km h-1|km/h|km h**-1|km h^-1", 1 / 3.6],
    ],
  },
  temperature: {
    units: "K",
    rows: [
      ["k|kelvin|kelvins|degk|deg_k|degree_k|degrees_k|degree_kelvin|degrees_kelvin", 1],
      [
        "c|degc|deg_c|°c|celsius|degree_c|degrees_c|degree_celsius|degrees_celsius|degree celsius|degrees celsius",
        1,
        273.15,
      ],
    ],
  },
  pressure: {
    units: "hPa",
    rows: [
      ["hpa|mb|mbar|millibar|millibars|hectopascal|hectopascals", 1],
      ["pa|pascal|pascals", 0.01],
      ["kpa|kilopascal|kilopascals", 10],
    ],
  },
};

const CONVERSIONS: ReadonlyMap<UnitKind, ReadonlyMap<string, Conversion>> = new Map(
  (Object.keys(TABLE) as UnitKind[]).map((kind) => [
    kind,
    new Map(
      TABLE[kind].rows.flatMap(([spellings, factor, offset = 0]) =>
        spellings.split("|").map((spelling) => [spelling, { units: TABLE[kind].units, factor, offset }] as const),
      ),
    ),
  ]),
);

function plain(spelling: string): string {
  return spelling
    .trim()
    .toLowerCase()
    .replace(/[\s_]+/g, (gap) => (gap.includes("_") ? "_" : " "))
    .replace(/[⁻−]/g, "-")
    .replace(/[·⋅]/g, ".")
    .replace(/¹/g, "1")
    .replace(/²/g, "2");
}

/** How a unit of this kind is converted, or null if the spelling is not one of the table's. */
export function conversion(kind: UnitKind, spelling: string): Conversion | null {
  return CONVERSIONS.get(kind)?.get(plain(spelling)) ?? null;
}

/** The kinds that a spelling can stand for. */
export function kindsOf(spelling: string): UnitKind[] {
  return (Object.keys(TABLE) as UnitKind[]).filter((kind) => conversion(kind, spelling) !== null);
}

/** Some spellings of a kind, for messages. */
export function acceptedSpellings(kind: UnitKind): string {
  return TABLE[kind].rows.map(([spellings]) => spellings.split("|")[0]).join(", ");
}
