import { gaussLegendre } from './bath.js';

/** Points of the local polynomials; on a uniform grid, degree 9. */
export const STENCIL = 10;
const QUADRATURE = 32;

/** 1/Π_{m≠l}(l − m). */
const INVERSES = Float64Array.from({ length: STENCIL }, (_, l) => {
  let product = 1;
  for (let m = 0; m < STENCIL; m++) if (m !== l) product *= l - m;
  return 1 / product;
});
const before = new Float64Array(STENCIL + 1);

/** Lagrange polynomials on the points 0 … STENCIL−1 at x. */
export function lagrange(x: number, out: Float64Array): void {
  before[0] = 1;
  for (let l = 0; l < STENCIL; l++) before[l + 1] = before[l] * (x - l);
  let after = 1;
  for (let l = STENCIL - 1; l >= 0; l--) {
    out[l] = before[l] * after * INVERSES[l];
    after *= x - l;
  }
}

/** Largest |ν|h that `memoryWeights` integrates to rounding. */
export const LARGEST_DECAY = 20;

/** Lagrange polynomials at the quadrature's points of a step that starts at point `offset`, [offset][point·STENCIL + l]. */
const BASES: readonly Float64Array[] = Array.from({ length: STENCIL - 1 }, (_, offset) => {
  const { nodes } = gaussLegendre(QUADRATURE);
  const basis = new Float64Array(STENCIL);
  const all = new Float64Array(QUADRATURE * STENCIL);
  for (let q = 0; q < QUADRATURE; q++) {
    lagrange(offset + (nodes[q] + 1) / 2, basis);
    all.set(basis, q * STENCIL);
  }
  return all;
});

/**
 * Weights w_l (re, im interleaved) with ∫_0^h e^{−ν(h−s)} g(t + s) ds ≈ Σ w_l g_l, one set per point of the stencil at which
 * the step may start: the exponential is integrated as it is, g as the polynomial through the stencil.
 */
export function memoryWeights(re: number, im: number, h: number): Float64Array[] {
  const { nodes, weights } = gaussLegendre(QUADRATURE);
  const out = BASES.map(() => new Float64Array(2 * STENCIL));
  for (let q = 0; q < QUADRATURE; q++) {
    const x = (nodes[q] + 1) / 2;
    const size = (h * weights[q] * Math.exp(-re * h * (1 - x))) / 2;
    const angle = -im * h * (1 - x);
    const cos = size * Math.cos(angle);
    const sin = size * Math.sin(angle);
    for (let offset = 0; offset < BASES.length; offset++) {
      const basis = BASES[offset];
      const own = out[offset];
      for (let l = 0; l < STENCIL; l++) {
        own[2 * l] += cos * basis[q * STENCIL + l];
        own[2 * l + 1] += sin * basis[q * STENCIL + l];
      }
    }
  }
  return out;
}

/** First point of the stencil that surrounds step j of a grid with `last` steps. */
export function stencilStart(j: number, last: number): number {
  return Math.min(Math.max(j - (STENCIL / 2 - 1), 0), last + 1 - STENCIL);
}
