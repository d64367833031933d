import { EARTH_RADIUS, OMEGA } from "../../core/constants.ts";
import { place } from "../../core/transforms/sphere/legendre.ts";
import { SphericalTransform } from "../../core/transforms/sphere/spherical-transform.ts";

/** Winds times cos φ, and absolute vorticity, on the Gaussian grid. */
export interface GridState {
  readonly u: Float64Array;
  readonly v: Float64Array;
  readonly q: Float64Array;
}

export type Source = (zeta: Float64Array, time: number) => Float64Array | null;

/**
 * The nondivergent barotropic vorticity equation on the sphere, ∂ζ/∂t = −∇·(V(ζ + f)) − ν∇⁴ζ + S, by spherical harmonics.
 *
 * Spectral coefficients (pairs, 2); products on a Gaussian grid of over 3T + 1 columns, so that they do not alias
 * (Williamson et al. 1992, J. Comput. Phys. 102, 211, case 6 is its check).
 */
export class BarotropicModel {
  readonly sphere: SphericalTransform;
  readonly radius: number;
  readonly omega: number;
  readonly #divided: Float64Array;
  readonly #degree: Float64Array;
  readonly #order: Float64Array;
  readonly #diffusion: number;

  /** @param decay Seconds in which the smallest scale is damped to 1/e by ν∇⁴; 0 = no damping. */
  constructor(truncation: number, nLat: number, nLon: number, decay: number, radius = EARTH_RADIUS, omega = OMEGA) {
    this.sphere = new SphericalTransform(truncation, nLat, nLon);
    this.radius = radius;
    this.omega = omega;
    const { sines, weights, pairs } = this.sphere;
    this.#divided = weights.map((w, j) => w / (radius * (1 - (sines[j] as number) ** 2)));
    this.#degree = new Float64Array(pairs);
    this.#order = new Float64Array(pairs);
    for (let m = 0; m <= truncation; m++)
      for (let n = m; n <= truncation; n++) {
        this.#degree[place(m, n, truncation)] = n;
        this.#order[place(m, n, truncation)] = m;
      }
    this.#diffusion = decay === 0 ? 0 : 1 / decay / (truncation * (truncation + 1)) ** 2;
  }

  /** ψ = ∇⁻²ζ. */
  streamfunction(zeta: Float64Array): Float64Array {
    const out = new Float64Array(zeta.length);
    for (let i = 0; i < this.#degree.length; i++) {
      const n = this.#degree[i] as number;
      if (n === 0) continue;
      const factor = -(this.radius ** 2) / (n * (n + 1));
      out[2 * i] = factor * (zeta[2 * i] as number);
      out[2 * i + 1] = factor * (zeta[2 * i + 1] as number);
    }
    return out;
  }

  /** ∂/∂λ: times im. */
  alongLongitude(c: Float64Array): Float64Array {
    const out = new Float64Array(c.length);
    for (let i = 0; i < this.#order.length; i++) {
      const m = this.#order[i] as number;
      out[2 * i] = -m * (c[2 * i + 1] as number);
      out[2 * i + 1] = m * (c[2 * i] as number);
    }
    return out;
  }

  gridState(zeta: Float64Array): GridState {
    const { sphere, radius, omega } = this;
    const psi = this.streamfunction(zeta);
    const u = sphere.synthesis(psi, sphere.table.h);
    const v = sphere.synthesis(this.alongLongitude(psi));
    for (let i = 0; i < u.length; i++) {
      u[i] = -(u[i] as number) / radius;
      v[i] = (v[i] as number) / radius;
    }
    const q = sphere.synthesis(zeta);
    for (let j = 0; j < sphere.nLat; j++) {
      const f = 2 * omega * (sphere.sines[j] as number);
      for (let i = 0; i < sphere.nLon; i++) q[j * sphere.nLon + i] = (q[j * sphere.nLon + i] as number) + f;
    }
    return { u, v, q };
  }

  /** Spectral ½Σ w/(a cos²φ) (im A P − B H): the divergence of (A, B)/cos φ; with (−B, A) its curl. */
  #divergence(a: Float64Array, b: Float64Array): Float64Array {
    const { sphere } = this;
    const first = this.alongLongitude(
      sphere.projected(sphere.rows(a), sphere.table.p, this.#divided, new Float64Array(2 * sphere.pairs)),
    );
    const second = sphere.projected(sphere.rows(b), sphere.table.h, this.#divided, new Float64Array(2 * sphere.pairs));
    for (let i = 0; i < first.length; i++) first[i] = (first[i] as number) - (second[i] as number);
    return first;
  }

  tendency(zeta: Float64Array, time: number, source: Source): Float64Array {
    const { u, v, q } = this.gridState(zeta);
    for (let i = 0; i < u.length; i++) {
      u[i] = (u[i] as number) * (q[i] as number);
      v[i] = (v[i] as number) * (q[i] as number);
    }
    const out = this.#divergence(u, v);
    const forcing = source(zeta, time);
    for (let i = 0; i < this.#degree.length; i++) {
      const n = this.#degree[i] as number;
      const damp = this.#diffusion * (n * (n + 1)) ** 2;
      for (const part of [2 * i, 2 * i + 1])
        out[part] =
          -(out[part] as number) - damp * (zeta[part] as number) + (forcing === null ? 0 : (forcing[part] as number));
    }
    return out;
  }

  /** One step of the classical fourth-order Runge–Kutta method. */
  step(zeta: Float64Array, time: number, dt: number, source: Source = () => null): Float64Array {
    const plus = (k: Float64Array, h: number): Float64Array => zeta.map((z, i) => z + h * (k[i] as number));
    const k1 = this.tendency(zeta, time, source);
    const k2 = this.tendency(plus(k1, dt / 2), time + dt / 2, source);
    const k3 = this.tendency(plus(k2, dt / 2), time + dt / 2, source);
    const k4 = this.tendency(plus(k3, dt), time + dt, source);
    return zeta.map(
      (z, i) => z + (dt / 6) * ((k1[i] as number) + 2 * (k2[i] as number) + 2 * (k3[i] as number) + (k4[i] as number)),
    );
  }

  /**
   * Spectral Φ + ½|V|² of the flow in nonlinear balance: ∇²(Φ + ½|V|²) = k·∇×((ζ + f)V), the divergence equation of a flow
   * that stays nondivergent.
   */
  balancedHead(zeta: Float64Array): Float64Array {
    const { u, v, q } = this.gridState(zeta);
    const a = v.map((value, i) => value * (q[i] as number));
    const b = u.map((value, i) => -value * (q[i] as number));
    const curl = this.#divergence(a, b);
    return this.streamfunction(curl);
  }
}
