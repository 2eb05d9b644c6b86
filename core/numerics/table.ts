/** Number of points of the interpolation stencil. */
export const STENCIL = 12;

/** Barycentric weights of equidistant points: (−1)^j C(n−1, j). */
const WEIGHTS = Float64Array.from({ length: STENCIL }, (_, j) => {
  let binomial = 1;
  for (let i = 0; i < j; i++) binomial = (binomial * (STENCIL - 1 - i)) / (i + 1);
  return j % 2 === 0 ? binomial : -binomial;
});

/**
 * Error of the interpolation midway between two points, for a function with the given bound on its 12th derivative:
 * Π|x − x_j|/12! · bound · step^12, the product being (½·3/2·…·11/2)².
 */
export function interpolationError(derivativeBound: number, step: number): number {
  let factor = 1;
  for (let j = 0; j < STENCIL / 2; j++) factor *= (j + 0.5) ** 2;
  for (let j = 2; j <= STENCIL; j++) factor /= j;
  return factor * derivativeBound * step ** STENCIL;
}

/** Largest step that keeps `interpolationError` at `error`. */
export function interpolationStep(derivativeBound: number, error: number): number {
  return (error / interpolationError(derivativeBound, 1)) ** (1 / STENCIL);
}

/**
 * Complex samples on a uniform grid, read between the points by 12-point barycentric Lagrange interpolation.
 * Source: Berrut & Trefethen, SIAM Rev. 46, 501 (2004).
 */
export class UniformTable {
  readonly start: number;
  readonly step: number;
  readonly length: number;
  readonly #data: Float64Array;

  /** @param data interleaved (re, im), at least 12 points; value j belongs to start + j·step. */
  constructor(start: number, step: number, data: Float64Array) {
    this.start = start;
    this.step = step;
    this.length = data.length / 2;
    this.#data = data;
    if (this.length < STENCIL) {
      throw new RangeError(`interpolation table: got ${this.length} points; needs at least ${STENCIL}`);
    }
  }

  /** Writes re, im at x; the stencil is central except within five steps of the ends. */
  read(x: number, out: Float64Array): void {
    const data = this.#data;
    const position = (x - this.start) / this.step;
    const first = Math.max(0, Math.min(this.length - STENCIL, Math.floor(position) - (STENCIL / 2 - 1)));
    const local = position - first;
    let re = 0;
    let im = 0;
    let norm = 0;
    for (let j = 0, k = 2 * first; j < STENCIL; j++, k += 2) {
      const distance = local - j;
      if (distance === 0) {
        out[0] = data[k];
        out[1] = data[k + 1];
        return;
      }
      const weight = WEIGHTS[j] / distance;
      norm += weight;
      re += weight * data[k];
      im += weight * data[k + 1];
    }
    out[0] = re / norm;
    out[1] = im / norm;
  }

  /** The transpose of `read`: adds (re, im) times each point's share of the value at x to that point of `into`. */
  spread(x: number, re: number, im: number, into: Float64Array): void {
    const position = (x - this.start) / this.step;
    const first = Math.max(0, Math.min(this.length - STENCIL, Math.floor(position) - (STENCIL / 2 - 1)));
    const local = position - first;
    let norm = 0;
    for (let j = 0; j < STENCIL; j++) {
      if (local === j) {
        into[2 * (first + j)] += re;
        into[2 * (first + j) + 1] += im;
        return;
      }
      norm += WEIGHTS[j] / (local - j);
    }
    for (let j = 0, k = 2 * first; j < STENCIL; j++, k += 2) {
      const share = WEIGHTS[j] / ((local - j) * norm);
      into[k] += share * re;
      into[k + 1] += share * im;
    }
  }
}
