import type { Reply, Space, Trial } from '../../optimizers/index.js';

export const cube = (dimension: number): Space => ({
  dimension,
  categories: new Array<number>(dimension).fill(0),
});

const value = (objectives: number[]): Reply => ({ objectives, constraints: [] });
const sum = (numbers: readonly number[]) => numbers.reduce((total, n) => total + n, 0);

/** Zitzler, Deb & Thiele, Evol. Comput. 8, 173 (2000); 30 variables. Front f2 = 1 − √f1. */
export function zdt1(x: Trial): Reply {
  const g = 1 + (9 * sum(x.slice(1))) / (x.length - 1);
  return value([x[0], g * (1 - Math.sqrt(x[0] / g))]);
}

/** The same source; front f2 = 1 − f1². */
export function zdt2(x: Trial): Reply {
  const g = 1 + (9 * sum(x.slice(1))) / (x.length - 1);
  return value([x[0], g * (1 - (x[0] / g) ** 2)]);
}

/** Deb, Thiele, Laumanns & Zitzler, CEC (2002); three objectives, 12 variables. Front: the unit sphere's octant. */
export function dtlz2(x: Trial): Reply {
  const g = sum(x.slice(2).map((u) => (u - 0.5) ** 2));
  const [a, b] = [(x[0] * Math.PI) / 2, (x[1] * Math.PI) / 2];
  return value([
    (1 + g) * Math.cos(a) * Math.cos(b),
    (1 + g) * Math.cos(a) * Math.sin(b),
    (1 + g) * Math.sin(a),
  ]);
}

/** Optimum of the shifted functions below, off the centre of the cube and different along each coordinate. */
export const optimumAt = (k: number) => 0.5 + 0.17 * Math.cos(1 + 2.3 * k);

const shifted = (x: Trial, width: number) => x.map((u, k) => width * (u - optimumAt(k)));

/** Rosenbrock, Comput. J. 3, 175 (1960), moved so that its minimum 0 is at `optimumAt`. */
export function rosenbrock(x: Trial): Reply {
  const y = shifted(x, 4).map((z) => z + 1);
  return value([sum(y.slice(1).map((z, k) => 100 * (z - y[k] ** 2) ** 2 + (1 - y[k]) ** 2))]);
}

/** Rastrigin (1974), from memory, moved likewise. */
export function rastrigin(x: Trial): Reply {
  const y = shifted(x, 10.24);
  return value([sum(y.map((z) => z * z - 10 * Math.cos(2 * Math.PI * z) + 10))]);
}

/** Ackley (1987), from memory, moved likewise. */
export function ackley(x: Trial): Reply {
  const y = shifted(x, 60);
  const radius = Math.sqrt(sum(y.map((z) => z * z)) / y.length);
  const waves = sum(y.map((z) => Math.cos(2 * Math.PI * z))) / y.length;
  return value([20 * (1 - Math.exp(-0.2 * radius)) + Math.E - Math.exp(waves)]);
}
