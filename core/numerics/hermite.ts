import { EigenvalueDecomposition, Matrix } from 'ml-matrix';

/** Nodes and weights: the mean of f is Σ weights_i f(nodes_i). */
export interface NormalRule {
  readonly nodes: readonly number[];
  readonly weights: readonly number[];
}

/** Beyond this the outermost weights fall below the smallest double. */
const LIMIT = 350;

/** Orthonormal Hermite functions' values at x up to degree n: h_n, h_{n−1} and Σ_{k<n} h_k². */
function recurrence(n: number, x: number): { last: number; before: number; sum: number } {
  let before = 0;
  let last = 1;
  let sum = 0;
  for (let k = 0; k < n; k++) {
    sum += last * last;
    const next = (x * last - Math.sqrt(k) * before) / Math.sqrt(k + 1);
    before = last;
    last = next;
  }
  return { last, before, sum };
}

/** Rules made before: one depends on nothing but its order. */
const known = new Map<number, NormalRule>();

/**
 * Gauss–Hermite rule for a standard normal variable, exact for polynomials up to degree 2n − 1. Nodes ascend.
 * Source: Golub & Welsch, Math. Comput. 23, 221 (1969), with one Newton polish; weights from the Christoffel sum.
 */
export function gaussHermite(n: number): NormalRule {
  if (!Number.isInteger(n) || n < 1 || n > LIMIT) {
    throw new RangeError(`Gauss–Hermite order: got ${n}; needs an integer from 1 to ${LIMIT}`);
  }
  const found = known.get(n) ?? makeRule(n);
  known.set(n, found);
  return found;
}

function makeRule(n: number): NormalRule {
  const jacobi = Matrix.zeros(n, n);
  for (let k = 1; k < n; k++) {
    jacobi.set(k, k - 1, Math.sqrt(k));
    jacobi.set(k - 1, k, Math.sqrt(k));
  }
  const raw = new EigenvalueDecomposition(jacobi, { assumeSymmetric: true }).realEigenvalues;
  const rough = Array.from(raw).sort((a, b) => a - b);
  const nodes = rough.map((x, i) => {
    // The rule is even: keep the middle node exactly at zero and the others exactly opposite.
    const start = 0.5 * (x - rough[n - 1 - i]);
    const { last, before } = recurrence(n, start);
    return start === 0 ? 0 : start - last / (Math.sqrt(n) * before);
  });
  return { nodes, weights: nodes.map((x) => 1 / recurrence(n, x).sum) };
}
