import { place } from "../../core/transforms/sphere/legendre.ts";
import { BarotropicModel } from "./barotropic.ts";

/** What was put into the invented winter on purpose, for whoever wants to find it again. */
export interface Planted {
  readonly note: string;
  readonly block: {
    readonly longitude: number;
    readonly latitude: number;
    readonly onset: string;
    readonly end: string;
  };
  readonly waveTrain: {
    readonly longitude: number;
    readonly latitude: number;
    readonly start: string;
    readonly eastwardDegreesPerDay: readonly [number, number];
  };
}

export interface InventedDay {
  /** Vorticity coefficients, s⁻¹. */
  readonly zeta: Float64Array;
}

const T = 42;
const ROWS = 64;
const COLUMNS = 128;
const DAY = 86_400;
const STEP = 1800;
const SPIN_UP = 16;
const RELAX = 7 * DAY;
const SEED = 20_010_101;

const BLOCK = { lon: 12, lat: 57, onset: 27, end: 36 };
const TRAIN = { lon: 190, lat: 42, start: 8, end: 10 };

/** mulberry32, a small public-domain generator: the same numbers everywhere. */
function randomNumbers(seed: number): () => number {
  let a = seed;
  return () => {
    a = (a + 0x6d2b79f5) | 0;
    let t = Math.imul(a ^ (a >>> 15), 1 | a);
    t = (t + Math.imul(t ^ (t >>> 7), 61 | t)) ^ t;
    return ((t ^ (t >>> 14)) >>> 0) / 2 ** 32;
  };
}

const bump = (x: number, centre: number, width: number): number => Math.exp(-(((x - centre) / width) ** 2));
const apart = (a: number, b: number): number => ((((a - b + 180) % 360) + 360) % 360) - 180;

/** Zonal wind (m s⁻¹) of the flow that the model is drawn to: a northern winter's jet and a southern summer's. */
function drawnWind(lat: number): number {
  return 25 * bump(lat, 38, 14) + 12 * bump(lat, 58, 12) + 25 * bump(lat, -47, 13) - 4 * bump(lat, 0, 12);
}

/** Vorticity of the flow that the model is drawn to: the jets, and standing waves over invented heights and warm water. */
function drawnVorticity(model: BarotropicModel): Float64Array {
  const { sphere, radius } = model;
  const field = new Float64Array(ROWS * COLUMNS);
  for (let j = 0; j < ROWS; j++) {
    const lat = (Math.asin(sphere.sines[j] as number) * 180) / Math.PI;
    const h = 1e-3;
    const ucos = (at: number) => drawnWind(at) * Math.cos((at * Math.PI) / 180);
    const slope = (ucos(lat + h) - ucos(lat - h)) / ((2 * h * Math.PI) / 180);
    const zonal = -slope / (radius * Math.cos((lat * Math.PI) / 180));
    for (let i = 0; i < COLUMNS; i++) {
      const lon = (360 * i) / COLUMNS;
      const wave = (k: number, ridge: number) => -Math.cos((k * (lon - ridge) * Math.PI) / 180);
      const north = 1.5e-5 * bump(lat, 55, 16) * (0.8 * wave(1, 330) + 1.2 * wave(2, 20) + 0.9 * wave(3, 355));
      const subtropics = 0.8e-5 * bump(lat, 33, 10) * (0.8 * wave(2, 60) + 0.6 * wave(3, 100));
      const south = 0.5e-5 * bump(lat, -55, 14) * (wave(1, 200) + 0.4 * wave(3, 40));
      field[j * COLUMNS + i] = zonal + north + subtropics + south;
    }
  }
  return sphere.analysis(field);
}

/** A patch on the grid as a function of place: what is drawn to it, and how fast. */
function patch(model: BarotropicModel, shape: (lat: number, east: number) => number, lonCentre: number): Float64Array {
  const field = new Float64Array(ROWS * COLUMNS);
  for (let j = 0; j < ROWS; j++) {
    const lat = (Math.asin(model.sphere.sines[j] as number) * 180) / Math.PI;
    for (let i = 0; i < COLUMNS; i++)
      field[j * COLUMNS + i] = shape(lat, apart((360 * i) / COLUMNS, lonCentre) * Math.cos((lat * Math.PI) / 180));
  }
  return field;
}

/** Stirring of the synoptic waves: red noise in time (1.5 days), waves 4 to 9, where the storm tracks are. */
class Stirring {
  readonly #random = randomNumbers(SEED);
  readonly #state = new Float64Array((2 * ((T + 1) * (T + 2))) / 2);
  readonly #model: BarotropicModel;
  readonly #track: Float64Array;
  #forcing: Float64Array;

  constructor(model: BarotropicModel) {
    this.#model = model;
    this.#forcing = this.#state.slice();
    this.#track = patch(model, (lat) => bump(lat, 45, 13) + 0.9 * bump(lat, -48, 13), 0);
  }

  get forcing(): Float64Array {
    return this.#forcing;
  }

  #gauss(): number {
    const r = Math.sqrt(-2 * Math.log(1 - this.#random()));
    return r * Math.cos(2 * Math.PI * this.#random());
  }

  advance(dt: number, strength: number): void {
    const keep = Math.exp(-dt / (1.5 * DAY));
    const fresh = Math.sqrt(1 - keep * keep) * strength;
    for (let m = 4; m <= 9; m++)
      for (let n = m; n <= 16; n++)
        for (const part of [0, 1]) {
          const i = 2 * place(m, n, T) + part;
          this.#state[i] = keep * (this.#state[i] as number) + fresh * this.#gauss();
        }
    const grid = this.#model.sphere.synthesis(this.#state);
    for (let i = 0; i < grid.length; i++) grid[i] = (grid[i] as number) * (this.#track[i] as number);
    this.#forcing = this.#model.sphere.analysis(grid);
  }
}

/** Take the mean out of a pull, where it pulls: a source of net rotation would drag the whole polar cap along. */
function balance(
  pull: Float64Array,
  weights: Float64Array,
  a: Float64Array,
  b: Float64Array,
  useA: number,
  useB: number,
): void {
  const share = a.map((value, i) => useA * value + useB * (b[i] as number));
  let total = 0;
  let sum = 0;
  for (let i = 0; i < pull.length; i++) {
    const w = weights[Math.floor(i / COLUMNS)] as number;
    total += w * (pull[i] as number);
    sum += w * (share[i] as number);
  }
  for (let i = 0; i < pull.length; i++) pull[i] = (pull[i] as number) - ((share[i] as number) * total) / sum;
}

/** 1 within [from, to], rising and falling over `ramp` days. */
function window(day: number, from: number, to: number, ramp: number): number {
  const rise = Math.min(1, Math.max(0, (day - from + ramp) / ramp));
  const fall = Math.min(1, Math.max(0, (to + ramp - day) / ramp));
  return Math.min(rise, fall);
}

/** Run the model: `days` states, one a day, after a spin-up that is thrown away. */
export function invention(days: number): { days: InventedDay[]; planted: Planted } {
  const model = new BarotropicModel(T, ROWS, COLUMNS, 0.25 * DAY);
  const { sphere } = model;
  const drawn = drawnVorticity(model);
  const stirring = new Stirring(model);
  const blockPlace = patch(model, (lat, east) => bump(lat, BLOCK.lat - 6, 17) * bump(east, 0, 15), BLOCK.lon);
  const blockShape = patch(
    model,
    (lat, east) => (-6.5e-5 * bump(lat, BLOCK.lat + 2, 9) + 5.5e-5 * bump(lat, BLOCK.lat - 17, 8)) * bump(east, 0, 12),
    BLOCK.lon,
  );
  const trainPlace = patch(model, (lat, east) => bump(lat, TRAIN.lat, 10) * bump(east, 0, 11), TRAIN.lon);
  const trainShape = patch(model, (lat, east) => 9e-5 * bump(lat, TRAIN.lat + 2, 7) * bump(east, 0, 8), TRAIN.lon);
  const background = sphere.synthesis(drawn);

  let now = 0;
  const source = (zeta: Float64Array): Float64Array => {
    const out = stirring.forcing.slice();
    for (let i = 0; i < out.length; i++)
      out[i] = (out[i] as number) + ((drawn[i] as number) - (zeta[i] as number)) / RELAX;
    const block = window(now, BLOCK.onset, BLOCK.end, 2.5);
    const train = window(now, TRAIN.start, TRAIN.end, 0.75);
    if (block === 0 && train === 0) return out;
    const grid = sphere.synthesis(zeta);
    const pull = grid.map((value, i) => {
      const toBlock =
        (block / (0.6 * DAY)) *
        (blockPlace[i] as number) *
        ((background[i] as number) + (blockShape[i] as number) - value);
      const toTrain =
        (train / (0.4 * DAY)) *
        (trainPlace[i] as number) *
        ((background[i] as number) + (trainShape[i] as number) - value);
      return toBlock + toTrain;
    });
    balance(pull, sphere.weights, blockPlace, trainPlace, block > 0 ? 1 : 0, train > 0 ? 1 : 0);
    grid.set(pull);
    const drawnIn = sphere.analysis(grid);
    for (let i = 0; i < out.length; i++) out[i] = (out[i] as number) + (drawnIn[i] as number);
    return out;
  };

  let zeta: Float64Array = drawn.slice();
  const kept: InventedDay[] = [];
  const perDay = DAY / STEP;
  for (let s = -SPIN_UP * perDay; s <= (days - 1) * perDay; s++) {
    now = s / perDay;
    if (s >= 0 && s % perDay === 0) kept.push({ zeta });
    stirring.advance(STEP, 2.3e-11);
    zeta = model.step(zeta, 0, STEP, source);
  }
  const date = (day: number): string => new Date(Date.UTC(2001, 0, 1 + day)).toISOString().slice(0, 10);
  return {
    days: kept,
    planted: {
      note: "Invented. What the maker put into the invented winter on purpose.",
      block: { longitude: BLOCK.lon, latitude: BLOCK.lat, onset: date(BLOCK.onset), end: date(BLOCK.end) },
      waveTrain: {
        longitude: TRAIN.lon - 360,
        latitude: TRAIN.lat,
        start: date(TRAIN.start),
        eastwardDegreesPerDay: [20, 35],
      },
    },
  };
}
