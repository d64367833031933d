/** What to do about a grid that is not read. */
const REGRID = "regrid it to a regular latitude–longitude grid and open that";
const TRANSFORM = "transform it to a regular latitude–longitude grid and open that";

/** WMO Manual on Codes, FM 92 GRIB edition 1, code table 6. */
const EDITION_1: Readonly<Record<number, string>> = {
  1: "Mercator",
  2: "gnomonic",
  3: "Lambert conformal",
  5: "polar stereographic",
  6: "UTM",
  7: "simple polyconic",
  8: "Albers equal-area",
  9: "Miller's cylindrical",
  10: "rotated latitude–longitude",
  13: "oblique Lambert conformal",
  14: "rotated Gaussian",
  20: "stretched latitude–longitude",
  24: "stretched Gaussian",
  30: "stretched and rotated latitude–longitude",
  34: "stretched and rotated Gaussian",
  50: "spherical harmonic",
  60: "rotated spherical harmonic",
  70: "stretched spherical harmonic",
  80: "stretched and rotated spherical harmonic",
  90: "space view",
  192: "icosahedral",
};

/** FM 92 GRIB edition 2, code table 3.1. */
const EDITION_2: Readonly<Record<number, string>> = {
  1: "rotated latitude–longitude",
  2: "stretched latitude–longitude",
  3: "stretched and rotated latitude–longitude",
  4: "variable-resolution latitude–longitude",
  5: "variable-resolution rotated latitude–longitude",
  10: "Mercator",
  12: "transverse Mercator",
  20: "polar stereographic",
  30: "Lambert conformal",
  31: "Albers equal-area",
  41: "rotated Gaussian",
  42: "stretched Gaussian",
  43: "stretched and rotated Gaussian",
  50: "spherical harmonic",
  51: "rotated spherical harmonic",
  52: "stretched spherical harmonic",
  53: "stretched and rotated spherical harmonic",
  61: "spectral Mercator",
  62: "spectral polar stereographic",
  63: "spectral Lambert conformal",
  90: "space view",
  100: "icosahedral",
  101: "unstructured",
  110: "azimuthal equidistant",
  120: "azimuth-range",
  140: "Lambert azimuthal equal-area",
  150: "HEALPix",
  204: "curvilinear",
};

/** Why a grid that is not read is refused, by name, and what to do. */
export function gridRefusal(edition: 1 | 2, type: number): string {
  const name = (edition === 1 ? EDITION_1 : EDITION_2)[type];
  if (name === undefined) return `its grid is of type ${type} of GRIB edition ${edition}, which is not read; ${REGRID}`;
  return name.includes("harmonic") || name.startsWith("spectral")
    ? `its values are spectral coefficients (${name}), not points of a grid; ${TRANSFORM}`
    : `its grid is ${name}, which is not read; ${REGRID}`;
}

/** Rows of different length, on a Gaussian or on evenly spaced latitudes. */
export function reducedRefusal(isGaussian: boolean): string {
  return `its grid is ${isGaussian ? "reduced Gaussian" : "reduced latitude–longitude"} (fewer points in rows near the poles), which is not read; ${REGRID}`;
}
