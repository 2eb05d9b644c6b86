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

/** The same source; front in five pieces. */
export function zdt3(x: Trial): Reply {
  const g = 1 + (9 * sum(x.slice(1))) / (x.length - 1);
  const ratio = x[0] / g;
  return value([x[0], g * (1 - Math.sqrt(ratio) - ratio * Math.sin(10 * Math.PI * x[0]))]);
}

/** The same source; 10 variables, the later ones within −5 and 5; 21⁹ local fronts. */
export function zdt4(x: Trial): Reply {
  const y = x.slice(1).map((u) => 10 * u - 5);
  const g = 1 + 10 * y.length + sum(y.map((v) => v * v - 10 * Math.cos(4 * Math.PI * v)));
  return value([x[0], g * (1 - Math.sqrt(x[0] / g))]);
}

/** The same source; 10 variables, unevenly spread. Front f2 = 1 − f1² from f1 = 0.2807753191 on. */
export function zdt6(x: Trial): Reply {
  const f = 1 - Math.exp(-4 * x[0]) * Math.sin(6 * Math.PI * x[0]) ** 6;
  const g = 1 + 9 * (sum(x.slice(1)) / (x.length - 1)) ** 0.25;
  return value([f, g * (1 - (f / g) ** 2)]);
}

/** Binh & Korn (1997), as in Deb et al., IEEE Trans. Evol. Comput. 6, 182 (2002). */
export function bnh([u, v]: Trial): Reply {
  const [x, y] = [5 * u, 3 * v];
  return {
    objectives: [4 * x * x + 4 * y * y, (x - 5) ** 2 + (y - 5) ** 2],
    constraints: [((x - 5) ** 2 + y * y) / 25 - 1, 1 - ((x - 8) ** 2 + (y + 3) ** 2) / 7.7],
  };
}

/** Osyczka & Kundu, Struct. Optim. 10, 94 (1995): six variables, six constraints. */
export function osy(u: Trial): Reply {
  const [a, b, c, d, e, f] = [10 * u[0], 10 * u[1], 1 + 4 * u[2], 6 * u[3], 1 + 4 * u[4], 10 * u[5]];
  return {
    objectives: [
      -(25 * (a - 2) ** 2 + (b - 2) ** 2 + (c - 1) ** 2 + (d - 4) ** 2 + (e - 1) ** 2),
      a * a + b * b + c * c + d * d + e * e + f * f,
    ],
    constraints: [
      1 - (a + b) / 2,
      (a + b) / 6 - 1,
      (b - a) / 2 - 1,
      (a - 3 * b) / 2 - 1,
      ((c - 3) ** 2 + d) / 4 - 1,
      1 - ((e - 3) ** 2 + f) / 4,
    ],
  };
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

/** Griewank (1981), from memory, moved likewise. */
export function griewank(x: Trial): Reply {
  const y = shifted(x, 600);
  const waves = y.reduce((product, z, k) => product * Math.cos(z / Math.sqrt(k + 1)), 1);
  return value([1 + sum(y.map((z) => z * z)) / 4000 - waves]);
}
