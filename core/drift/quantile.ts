import type { DriftAxes, Rule } from './nodes.js';

/** Neighbouring nodes that an interpolated value is taken from. */
const STENCIL = 6;
/** Points of the standard normal variable for one drift, and its reach. */
const LINE = 601;
const REACH = 4.5;
/** Points for several drifts. */
const CLOUD = 2048;

interface Weighted {
  /** Standard normal coordinates of each drift. */
  readonly x: readonly number[];
  readonly weight: number;
}

/** First node of the stencil and the Lagrange weights on it. */
function interpolation({ nodes }: Rule, x: number): { first: number; weights: number[] } {
  const size = Math.min(STENCIL, nodes.length);
  let first = 0;
  while (first + size < nodes.length && nodes[first + size] - x < x - nodes[first]) first++;
  const near = nodes.slice(first, first + size);
  const weights = near.map((own, i) =>
    near.reduce((product, other, k) => (k === i ? product : (product * (x - other)) / (own - other)), 1),
  );
  return { first, weights };
}

/** Radical inverse of i in a base: coordinate of the Halton sequence (Halton, Numer. Math. 2, 84 (1960)). */
function radicalInverse(i: number, base: number): number {
  let [value, digit] = [0, 1 / base];
  for (let rest = i; rest > 0; rest = Math.floor(rest / base), digit /= base) value += (rest % base) * digit;
  return value;
}

const BASES = [2, 3, 5, 7];

/** Standard normal points that cover the distribution evenly, by the Halton sequence and the Box–Muller transform. */
function cloud(dimension: number): Weighted[] {
  return Array.from({ length: CLOUD }, (_, i) => {
    const u = BASES.map((base) => radicalInverse(i + 1, base));
    const pairs = [0, 2].flatMap((k) => {
      const radius = Math.min(REACH, Math.sqrt(-2 * Math.log(u[k])));
      return [radius * Math.cos(2 * Math.PI * u[k + 1]), radius * Math.sin(2 * Math.PI * u[k + 1])];
    });
    return { x: pairs.slice(0, dimension), weight: 1 / CLOUD };
  });
}

function line(): Weighted[] {
  const points = Array.from({ length: LINE }, (_, i) => REACH * ((2 * i) / (LINE - 1) - 1));
  const raw = points.map((x) => Math.exp((-x * x) / 2));
  const sum = raw.reduce((a, b) => a + b, 0);
  return points.map((x, i) => ({ x: [x], weight: raw[i] / sum }));
}

/** Points for each number of drifts, made once. */
const made: (Weighted[] | undefined)[] = [];

function pointsFor(dimension: number): readonly Weighted[] {
  made[dimension] ??= dimension === 1 ? line() : cloud(dimension);
  return made[dimension];
}

/** The value below which a share of the weight lies; between two values in proportion. */
function weightedQuantile(values: readonly number[], points: readonly Weighted[], share: number): number {
  const order = values.map((_, i) => i).sort((a, b) => values[a] - values[b] || a - b);
  // The weight of a point lies half below its value and half above.
  let below = 0;
  let [lastValue, lastShare] = [values[order[0]], 0];
  for (const i of order) {
    const here = below + 0.5 * points[i].weight;
    if (here >= share) {
      const t = here > lastShare ? (share - lastShare) / (here - lastShare) : 1;
      return lastValue + t * (values[i] - lastValue);
    }
    [lastValue, lastShare] = [values[i], here];
    below += points[i].weight;
  }
  return lastValue;
}

/**
 * Quantiles over drift of figures known at the nodes of a tensor product (the last axis fastest): each figure is
 * interpolated between the nodes by local polynomials, on a line of points for one drift and on a quasi-random cloud
 * for several. `figures[k].values` are the figure at the nodes, `share` the share of the drift below the result.
 */
export function driftQuantiles(
  axes: DriftAxes,
  figures: readonly { readonly values: readonly number[]; readonly share: number }[],
): number[] {
  const rules = [axes.area, axes.width, axes.shift, axes.center].filter(({ nodes }) => nodes.length > 1);
  if (rules.length === 0) return figures.map(({ values }) => values[0]);
  const points = pointsFor(rules.length);
  const at = points.map(({ x }) => stencil(rules, x));
  return figures.map(({ values, share }) => {
    const interpolated = at.map((terms) => terms.reduce((sum, [i, w]) => sum + w * values[i], 0));
    return weightedQuantile(interpolated, points, share);
  });
}

/** Flat indices and weights of the nodes around a point. */
function stencil(rules: readonly Rule[], x: readonly number[]): [number, number][] {
  let terms: [number, number][] = [[0, 1]];
  rules.forEach((rule, k) => {
    const { first, weights } = interpolation(rule, x[k]);
    terms = terms.flatMap(([i, w]) =>
      weights.map((own, j): [number, number] => [i * rule.nodes.length + first + j, w * own]),
    );
  });
  return terms;
}
