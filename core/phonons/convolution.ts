import type { ExponentialFit } from './fit.js';
import { memoryWeights, STENCIL, stencilStart } from './stencil.js';

interface Memory {
  readonly re: number;
  readonly im: number;
  /** Amplitude of e^{−νt} and of its conjugate (zero for a real pole). */
  readonly own: readonly [number, number];
  readonly mirrored: readonly [number, number];
  /** ∫ e^{−ν(t−s)} X̃(s) ds, (re, im) per coordinate. */
  readonly state: Float64Array;
  weights: readonly Float64Array[];
  decay: readonly [number, number];
}

/**
 * P(t) = ∫ f(t − s) X̃(s) ds for a Hermitian operator X̃ in real coordinates, advanced step by step on a uniform grid.
 * Conjugate exponentials share one recursion, because X̃ is real in its coordinates.
 */
export class Convolution {
  private readonly memories: readonly Memory[];

  constructor(
    fit: ExponentialFit,
    private readonly size: number,
  ) {
    this.memories = fit.poles
      .filter((pole, k) => pole.partner >= k)
      .map((pole) => ({
        re: pole.re,
        im: pole.im,
        own: pole.amplitude,
        mirrored: pole.im === 0 ? [0, 0] : fit.poles[pole.partner].amplitude,
        state: new Float64Array(2 * size),
        weights: [],
        decay: [0, 0],
      }));
  }

  /** Sets the step; the memory so far stays. */
  setStep(h: number): void {
    for (const m of this.memories) {
      m.weights = Array.from({ length: STENCIL - 1 }, (_, offset) => memoryWeights(m.re, m.im, h, offset));
      const size = Math.exp(-m.re * h);
      m.decay = [size * Math.cos(m.im * h), -size * Math.sin(m.im * h)];
    }
  }

  /** Step j of a grid whose samples of X̃ lie in `series`, point after point. */
  advance(series: Float64Array, j: number, last: number): void {
    const { size } = this;
    const start = stencilStart(j, last);
    for (const m of this.memories) {
      const w = m.weights[j - start];
      const [dr, di] = m.decay;
      const { state } = m;
      for (let x = 0; x < size; x++) {
        const re = state[2 * x];
        const im = state[2 * x + 1];
        let sr = dr * re - di * im;
        let si = dr * im + di * re;
        for (let l = 0; l < STENCIL; l++) {
          const g = series[(start + l) * size + x];
          sr += w[2 * l] * g;
          si += w[2 * l + 1] * g;
        }
        state[2 * x] = sr;
        state[2 * x + 1] = si;
      }
    }
  }

  /** Writes P, (re, im) per coordinate. */
  value(out: Float64Array): void {
    out.fill(0);
    for (const { own, mirrored, state } of this.memories) {
      const plusRe = own[0] + mirrored[0];
      const plusIm = own[1] + mirrored[1];
      const minusRe = own[0] - mirrored[0];
      const minusIm = own[1] - mirrored[1];
      for (let x = 0; x < this.size; x++) {
        const re = state[2 * x];
        const im = state[2 * x + 1];
        // c J + c' J* = (c + c') Re J + i (c − c') Im J
        out[2 * x] += plusRe * re - minusIm * im;
        out[2 * x + 1] += plusIm * re + minusRe * im;
      }
    }
  }
}
