/** Fixed surfaces that people meet, in words with `#` for the value. FM 92: edition 1 code table 3, edition 2 code table 4.5. */
const EDITION_1: Readonly<Record<number, string>> = {
  1: "at the surface",
  2: "at cloud base",
  3: "at cloud top",
  4: "at the 0 °C level",
  6: "at the level of the strongest wind",
  7: "at the tropopause",
  8: "at the top of the atmosphere",
  101: "on a layer between two pressure levels",
  102: "at mean sea level",
  103: "# m above mean sea level",
  104: "on a layer above mean sea level",
  105: "# m above the ground",
  106: "on a layer above the ground",
  107: "on a sigma level",
  109: "on a hybrid level",
  110: "on a layer of hybrid levels",
  111: "# cm below the ground",
  112: "on a layer below the ground",
  113: "on the isentrope of # K",
  117: "on a surface of potential vorticity",
  160: "# m below the sea's surface",
  200: "over the whole atmosphere",
};

const EDITION_2: Readonly<Record<number, string>> = {
  1: "at the surface",
  2: "at cloud base",
  3: "at cloud top",
  4: "at the 0 °C level",
  6: "at the level of the strongest wind",
  7: "at the tropopause",
  8: "at the top of the atmosphere",
  10: "over the whole atmosphere",
  101: "at mean sea level",
  102: "# m above mean sea level",
  103: "# m above the ground",
  104: "on a sigma level",
  105: "on a hybrid level",
  106: "# m below the ground",
  107: "on the isentrope of # K",
  108: "on a layer # Pa above the ground",
  109: "on a surface of potential vorticity",
  151: "on soil level #",
  160: "# m below the sea's surface",
  200: "over the whole atmosphere",
};

/** Why a field on another level than a pressure is left out. */
export function levelRefusal(edition: 1 | 2, type: number, value: number): string {
  const words = (edition === 1 ? EDITION_1 : EDITION_2)[type];
  const where =
    words === undefined ? `on a level of type ${type}` : words.replace("#", Number.isFinite(value) ? `${value}` : "?");
  return `it lies ${where}, not on a pressure level`;
}
