import { expect, test } from "vitest";
import { place } from "../../core/transforms/sphere/legendre.ts";
import { BarotropicModel } from "../../sample-data/model/barotropic.ts";

const A = 6_371_220; // m, Ω = 7.292e-5 s⁻¹: Williamson et al. 1992, J. Comput. Phys. 102, 211, section 3
const OMEGA = 7.292e-5;
const T = 42;

/** Vorticity of the Rossby–Haurwitz wave: ζ = 2ω sin φ − K (R² + 3R + 2) sin φ cos^R φ cos Rλ (ibid., equation 145, as vorticity). */
function rossbyHaurwitz(model: BarotropicModel, R: number, w: number, K: number): Float64Array {
  const { sphere } = model;
  const field = new Float64Array(sphere.nLat * sphere.nLon);
  for (let j = 0; j < sphere.nLat; j++) {
    const mu = sphere.sines[j] as number;
    const cos = Math.sqrt(1 - mu * mu);
    for (let i = 0; i < sphere.nLon; i++)
      field[j * sphere.nLon + i] =
        2 * w * mu - K * (R * R + 3 * R + 2) * mu * cos ** R * Math.cos((R * 2 * Math.PI * i) / sphere.nLon);
  }
  return sphere.analysis(field);
}

test("a Rossby–Haurwitz wave keeps its shape and moves at Haurwitz's speed", () => {
  // Haurwitz 1940, J. Mar. Res. 3, 254; Williamson et al. 1992, case 6
  const [R, w] = [4, 7.848e-6];
  const model = new BarotropicModel(T, 64, 128, 0, A, OMEGA);
  let zeta = rossbyHaurwitz(model, R, w, w);
  const start = place(R, R + 1, T);
  const size = Math.hypot(zeta[2 * start] as number, zeta[2 * start + 1] as number);
  const days = 14;
  const dt = 1800;
  for (let s = 0; s < (days * 86_400) / dt; s++) zeta = model.step(zeta, s * dt, dt);
  const speed = (R * (3 + R) * w - 2 * OMEGA) / ((1 + R) * (2 + R));
  const re = zeta[2 * start] as number;
  const im = zeta[2 * start + 1] as number;
  // Eastward by speed·t: the coefficient turns by −R·speed·t from the phase −1 (a minus sign, real) that it began with.
  const expected = -R * speed * days * 86_400;
  const phase = Math.atan2(-im, -re);
  const off = Math.atan2(Math.sin(phase - expected), Math.cos(phase - expected));
  // Fourth-order steps: relative phase error (σΔt)⁴/120 a step, σ = R·speed·1 ≈ 1e-5 s⁻¹, so 1e-10 in all; the rest is rounding.
  expect(Math.abs(off)).toBeLessThan(1e-8);
  expect(Math.abs(Math.hypot(re, im) / size - 1)).toBeLessThan(1e-8);
  // Nothing else grows: 1e-8 of the wave.
  let other = 0;
  for (let m = 1; m <= T; m++)
    for (let n = m; n <= T; n++) {
      const i = place(m, n, T);
      if (i !== start) other = Math.max(other, Math.hypot(zeta[2 * i] as number, zeta[2 * i + 1] as number));
    }
  expect(other / size).toBeLessThan(1e-8);
});

test("on solid rotation a harmonic of degree n moves at ω − 2(Ω + ω)/(n(n + 1))", () => {
  // Rossby 1939; the analytic case of a small wave on a super-rotation
  const model = new BarotropicModel(T, 64, 128, 0, A, OMEGA);
  const w = 4e-6;
  for (const [m, n] of [
    [1, 3],
    [3, 8],
    [5, 5],
  ] as const) {
    let zeta = new Float64Array(2 * model.sphere.pairs);
    zeta[2 * place(0, 1, T)] = (2 * w) / Math.sqrt(3);
    zeta[2 * place(m, n, T)] = 1e-12;
    const hours = 24;
    for (let s = 0; s < hours * 2; s++) zeta = model.step(zeta, 0, 1800) as Float64Array<ArrayBuffer>;
    const i = 2 * place(m, n, T);
    const moved = -Math.atan2(zeta[i + 1] as number, zeta[i] as number) / m / (hours * 3600);
    const theory = w - (2 * (OMEGA + w)) / (n * (n + 1));
    // Runge–Kutta's phase error (σΔt)⁴/120 of the turn, σΔt ≤ 0.09, and rounding
    expect(Math.abs(moved / theory - 1), `m ${m}, n ${n}`).toBeLessThan(1e-6);
  }
});

test("unforced and undamped, energy and enstrophy stay", () => {
  const model = new BarotropicModel(21, 32, 64, 0);
  let zeta = new Float64Array(2 * model.sphere.pairs);
  zeta[2 * place(0, 1, 21)] = 1e-5;
  for (let m = 0; m <= 6; m++)
    for (let n = Math.max(2, m); n <= 8; n++) zeta[2 * place(m, n, 21)] = (((m * 7 + n * 3) % 5) - 2) * 2e-6;
  const sums = (z: Float64Array) => {
    const psi = model.streamfunction(z);
    let energy = 0;
    let enstrophy = 0;
    for (let i = 0; i < z.length; i++) {
      energy -= (z[i] as number) * (psi[i] as number);
      enstrophy += (z[i] as number) ** 2;
    }
    return { energy, enstrophy };
  };
  // m = 0 counts half of what ±m count; the sums above weigh all alike, so compare a run whose m = 0 part is weighed rightly.
  const weighed = (z: Float64Array) => {
    const zonal = z.map((value, i) => (i < 2 * 22 ? value / Math.SQRT2 : value));
    return sums(zonal);
  };
  const before = weighed(zeta);
  for (let s = 0; s < 96; s++) zeta = model.step(zeta, 0, 900) as Float64Array<ArrayBuffer>;
  const after = weighed(zeta);
  // The truncated equation conserves both exactly; fourth-order steps lose (σΔt)⁵/144 a step, σΔt ≲ 0.05
  expect(Math.abs(after.energy / before.energy - 1)).toBeLessThan(1e-6);
  expect(Math.abs(after.enstrophy / before.enstrophy - 1)).toBeLessThan(1e-6);
});
