import { type ComplexMatrix, multiplyInto, norm } from './complex-matrix.js';

/** Nodes of the two-point Gauss rule on [0, 1]. */
export const MAGNUS_NODES: readonly [number, number] = [0.5 - Math.sqrt(3) / 6, 0.5 + Math.sqrt(3) / 6];

const TERMS = 24;

/**
 * One step of dU/dt = −iH(t)U by the fourth-order Magnus expansion (Blanes, Casas, Oteo & Ros, Phys. Rep. 470, 151
 * (2009)); the exponential by its Taylor series on U.
 */
export class UnitaryStep {
  private readonly generator: ComplexMatrix;
  private readonly product: ComplexMatrix;
  private readonly term: ComplexMatrix;

  constructor(private readonly n: number) {
    this.generator = new Float64Array(2 * n * n);
    this.product = new Float64Array(2 * n * n);
    this.term = new Float64Array(2 * n * n);
  }

  /** u ← U(t + h, t) u, with H at the two Gauss nodes of the step. */
  advance(first: ComplexMatrix, second: ComplexMatrix, h: number, u: ComplexMatrix): void {
    const { n, generator, product, term } = this;
    // −i·h/2 (H1 + H2) − (√3/12) h² [H2, H1]
    multiplyInto(n, second, first, product);
    multiplyInto(n, first, second, term);
    const c = (-Math.sqrt(3) / 12) * h * h;
    for (let k = 0; k < generator.length; k += 2) {
      generator[k] = (h / 2) * (first[k + 1] + second[k + 1]) + c * (product[k] - term[k]);
      generator[k + 1] = (-h / 2) * (first[k] + second[k]) + c * (product[k + 1] - term[k + 1]);
    }
    const size = norm(n, generator);
    const pieces = Math.max(1, Math.ceil(size / 2));
    for (let piece = 0; piece < pieces; piece++) this.exponential(size / pieces, 1 / pieces, u);
  }

  private exponential(size: number, scale: number, u: ComplexMatrix): void {
    const { n, generator, term, product } = this;
    term.set(u);
    let bound = 1;
    for (let k = 1; k <= TERMS && bound > 1e-12; k++) {
      multiplyInto(n, generator, term, product);
      const factor = scale / k;
      for (let x = 0; x < u.length; x++) {
        term[x] = product[x] * factor;
        u[x] += term[x];
      }
      bound *= size / k;
    }
  }
}
