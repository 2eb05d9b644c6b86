import type { ExponentialFit } from './fit.js';
import { memoryWeights, STENCIL, stencilStart } from './stencil.js';

interface Memory {
  readonly re: number;
  readonly im: number;
  /** Sum and difference of the amplitudes of e^{−νt} and of its conjugate (zero for a real pole). */
  readonly plusRe: number;
  readonly plusIm: number;
  readonly minusRe: number;
  readonly minusIm: number;
  /** ∫ e^{−ν(t−s)} X̃(s) ds, (re, im) per coordinate. */
  readonly state: Float64Array;
  weights: readonly Float64Array[];
  decayRe: number;
  decayIm: number;
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
      .map((pole) => {
        const own = pole.amplitude;
        const mirrored = pole.im === 0 ? [0, 0] : fit.poles[pole.partner].amplitude;
        return {
          re: pole.re,
          im: pole.im,
          plusRe: own[0] + mirrored[0],
          plusIm: own[1] + mirrored[1],
          minusRe: own[0] - mirrored[0],
          minusIm: own[1] - mirrored[1],
          state: new Float64Array(2 * size),
          weights: [],
          decayRe: 0,
          decayIm: 0,
        };
      });
  }

  /** Sets the step; the memory so far stays. */
  setStep(h: number): void {
    for (const m of this.memories) {
      m.weights = memoryWeights(m.re, m.im, h);
      const size = Math.exp(-m.re * h);
      m.decayRe = size * Math.cos(m.im * h);
      m.decayIm = -size * Math.sin(m.im * h);
    }
  }

  /** Step j of a grid whose samples of X̃ lie in `series`, point after point. */
  advance(series: Float64Array, j: number, last: number): void {
    const { size, memories } = this;
    const start = stencilStart(j, last);
    const first = start * size;
    for (let k = 0; k < memories.length; k++) {
      const m = memories[k];
      const w = m.weights[j - start];
      const dr = m.decayRe;
      const di = m.decayIm;
      const state = m.state;
      for (let x = 0; x < size; x++) {
        const re = state[2 * x];
        const im = state[2 * x + 1];
        let sr = dr * re - di * im;
        let si = dr * im + di * re;
        let at = first + x;
        for (let l = 0; l < 2 * STENCIL; l += 2) {
          const g = series[at];
          sr += w[l] * g;
          si += w[l + 1] * g;
          at += size;
        }
        state[2 * x] = sr;
        state[2 * x + 1] = si;
      }
    }
  }

  /** Writes P, (re, im) per coordinate. */
  value(out: Float64Array): void {
    out.fill(0);
    const { memories, size } = this;
    for (let k = 0; k < memories.length; k++) {
      const { plusRe, plusIm, minusRe, minusIm, state } = memories[k];
      for (let x = 0; x < size; x++) {
        const re = state[2 * x];
        const im = state[2 * x + 1];
        // c J + c' J* = (c + c') Re J + i (c − c') Im J
        out[2 * x] += plusRe * re - minusIm * im;
        out[2 * x + 1] += plusIm * re + minusRe * im;
      }
    }
  }
}
