/** Nodes of four-point Gauss–Legendre quadrature on a step of length 1, from its middle: ±INNER, ±OUTER. */
export const INNER = 0.5 * Math.sqrt(3 / 7 - (2 / 7) * Math.sqrt(6 / 5));
export const OUTER = 0.5 * Math.sqrt(3 / 7 + (2 / 7) * Math.sqrt(6 / 5));
/** Nodes per step. */
export const NODES = 4;
/** Places of the nodes in a step, ascending. */
export const PLACES: readonly number[] = [-OUTER, -INNER, INNER, OUTER];

/** Steps that are worked on at a time: they fit the first-level cache, and recurrences restart with each block. */
export const BLOCK = 64;

// Cubic extrapolation of the four nodes to the end of the step.
const EDGE = PLACES.map((x, j) => PLACES.reduce((p, y, k) => (k === j ? p : (p * (0.5 - y)) / (x - y)), 1));
const [E0, E1, E2, E3] = EDGE;

/** The drive at the end of a step from its four nodes at samples[i …]: good enough for small corrections. */
export function edgeOf(samples: Float64Array, i: number): number {
  return E0 * samples[i] + E1 * samples[i + 1] + E2 * samples[i + 2] + E3 * samples[i + 3];
}
