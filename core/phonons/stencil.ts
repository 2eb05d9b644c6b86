import { gaussLegendre } from './bath.js';

/** Points of the local polynomials; on a uniform grid, degree 5. */
export const STENCIL = 6;
const QUADRATURE = 24;

/** Lagrange polynomials on the points 0 … STENCIL−1 at x. */
export function lagrange(x: number, out: Float64Array): void {
  for (let l = 0; l < STENCIL; l++) {
    let value = 1;
    for (let m = 0; m < STENCIL; m++) if (m !== l) value *= (x - m) / (l - m);
    out[l] = value;
  }
}

/** Largest |ν|h that `memoryWeights` integrates to rounding. */
export const LARGEST_DECAY = 10;

/**
 * Weights w_l (re, im interleaved) with ∫_0^h e^{−ν(h−s)} g(t + s) ds ≈ Σ w_l g_l: the exponential is integrated as it is,
 * g as the polynomial through a stencil in which the step starts at point `offset`.
 */
export function memoryWeights(re: number, im: number, h: number, offset: number): Float64Array {
  const { nodes, weights } = gaussLegendre(QUADRATURE);
  const out = new Float64Array(2 * STENCIL);
  const basis = new Float64Array(STENCIL);
  for (let q = 0; q < QUADRATURE; q++) {
    const x = (nodes[q] + 1) / 2;
    lagrange(offset + x, basis);
    const size = (h * weights[q] * Math.exp(-re * h * (1 - x))) / 2;
    const angle = -im * h * (1 - x);
    const cos = size * Math.cos(angle);
    const sin = size * Math.sin(angle);
    for (let l = 0; l < STENCIL; l++) {
      out[2 * l] += cos * basis[l];
      out[2 * l + 1] += sin * basis[l];
    }
  }
  return out;
}

/** First point of the stencil that surrounds step j of a grid with `last` steps. */
export function stencilStart(j: number, last: number): number {
  return Math.min(Math.max(j - 2, 0), last + 1 - STENCIL);
}
