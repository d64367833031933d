/** Earth's radius, m: WMO Manual on Codes, GRIB edition 2, code table 3.2, shape 6. */
export const EARTH_RADIUS = 6_371_229;
/** Earth's rotation rate, rad s⁻¹: IERS / GRS80. */
export const OMEGA = 7.292115e-5;
/** Standard gravity, m s⁻²: 3rd CGPM 1901; defines the WMO geopotential metre. */
export const STANDARD_GRAVITY = 9.80665;
/** Specific gas constant of dry air, J kg⁻¹ K⁻¹: ISO 2533. */
export const GAS_CONSTANT_DRY = 287.05287;
/** R/c_p of dry air. */
export const KAPPA = 2 / 7;

export const SECONDS_PER_DAY = 86_400;
export const RADIANS_PER_DEGREE = Math.PI / 180;
