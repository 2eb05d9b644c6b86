import FFT from 'fft.js';

/** Largest transform: 2^20 complex points. */
export const FFT_LIMIT = 2 ** 20;

/** Smallest power of two that is not below n. */
export function powerOfTwo(n: number): number {
  return 2 ** Math.ceil(Math.log2(Math.max(2, n)));
}

/**
 * Discrete Fourier sums of one power-of-two size. Complex data are interleaved (re, im); input is left untouched.
 */
export class FourierPlan {
  readonly size: number;
  readonly #fft: FFT;

  constructor(size: number) {
    if (!Number.isInteger(Math.log2(size)) || size < 2 || size > FFT_LIMIT) {
      throw new RangeError(`FFT size: got ${size}; needs a power of two from 2 to ${FFT_LIMIT}`);
    }
    this.size = size;
    this.#fft = new FFT(size);
  }

  /** out_k = Σ_j in_j e^{−2πi jk/N}. */
  forward(input: Float64Array): Float64Array {
    const out = this.#allocate(input);
    this.#fft.transform(out, input);
    return out;
  }

  /** out_j = 1/N Σ_k in_k e^{+2πi jk/N}. */
  inverse(input: Float64Array): Float64Array {
    const out = this.#allocate(input);
    this.#fft.inverseTransform(out, input);
    return out;
  }

  #allocate(input: Float64Array): Float64Array {
    if (input.length !== 2 * this.size) {
      throw new RangeError(`FFT input: got ${input.length} numbers; needs ${2 * this.size}`);
    }
    return new Float64Array(input.length);
  }
}
