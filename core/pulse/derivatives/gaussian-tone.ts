import { HBAR } from '../../units/constants.js';
import type { Tone } from '../contract.js';
import type { GaussianTone } from '../gaussians.js';
import type { ToneAdjoint, ToneSamples } from './contract.js';
import { gaussianField } from './gaussian-field.js';
import { AREA, DELAY, DETUNING, FWHM, GDD, PHASE, POLARIZATION, TOD } from './layout.js';

/** FWHM of |Ω|² over the field σ: 2√ln 2. */
const FWHM_PER_SIGMA = 2 * Math.sqrt(Math.LN2);

/**
 * Derivatives of a Gaussian tone. With s = t − delay and z = σ² − i·GDD the envelope goes as exp(−s²/2z)/√z: every
 * derivative follows from the moments M_k = Σ ḡ·E·s^k of its field E of amplitude 1.
 */
export class GaussianToneAdjoint implements ToneAdjoint {
  readonly #tone: Tone;
  readonly #samples: ToneSamples;
  readonly #field: Float64Array;
  /** Amplitude for area 1. */
  readonly #unit: number;

  constructor(tone: Tone, gaussian: GaussianTone, samples: ToneSamples) {
    this.#tone = tone;
    this.#samples = samples;
    this.#field = gaussianField(gaussian, samples);
    const sigma = tone.fwhm / FWHM_PER_SIGMA;
    this.#unit = 1 / Math.sqrt(2 * Math.PI * Math.hypot(sigma * sigma, tone.gdd));
  }

  add(g: ArrayLike<number>, into: Float64Array, slot: number): void {
    const { delay, fwhm, gdd } = this.#tone;
    const m = this.#samples.components === 1 ? this.#momentsOfOne(g) : this.#momentsOfTwo(g);
    const [r0, i0, r1, i1, r2, i2, r3, i3, across] = m;
    const unit = this.#unit;
    const strength = unit * this.#tone.area;
    const variance = (fwhm / FWHM_PER_SIGMA) ** 2;
    // 1/z = a + ib.
    const modulus = variance * variance + gdd * gdd;
    const a = variance / modulus;
    const b = gdd / modulus;
    // env″/env summed: M₂/z² − M₀/z.
    const qr = (a * a - b * b) * r2 - 2 * a * b * i2 - (a * r0 - b * i0);
    const qi = (a * a - b * b) * i2 + 2 * a * b * r2 - (a * i0 + b * r0);
    // env‴/env summed: −M₃/z³ + 3M₁/z², of which only the real part counts.
    const cubeR = a * a * a - 3 * a * b * b;
    const cubeI = 3 * a * a * b - b * b * b;
    const third = -(cubeR * r3 - cubeI * i3) + 3 * ((a * a - b * b) * r1 - 2 * a * b * i1);
    into[slot + AREA] += unit * r0;
    into[slot + PHASE] -= strength * i0;
    into[slot + DETUNING] += (strength * (i1 + delay * i0)) / HBAR;
    into[slot + POLARIZATION] += strength * across;
    into[slot + DELAY] += strength * (a * r1 - b * i1);
    into[slot + FWHM] += ((strength * variance) / fwhm) * qr;
    into[slot + GDD] += 0.5 * strength * qi;
    into[slot + TOD] += (strength * third) / 6;
  }

  /** Re and Im of M₀ … M₃, and of M₀ across the tone's polarisation (0: there is none). */
  #momentsOfOne(g: ArrayLike<number>): readonly number[] {
    const { times } = this.#samples;
    const field = this.#field;
    const { delay } = this.#tone;
    let [r0, i0, r1, i1, r2, i2, r3, i3] = [0, 0, 0, 0, 0, 0, 0, 0];
    for (let i = 0, k = 0; i < times.length; i++, k += 2) {
      const s = times[i] - delay;
      const square = s * s;
      const re = g[k] * field[k] + g[k + 1] * field[k + 1];
      const im = g[k] * field[k + 1] - g[k + 1] * field[k];
      const rs = re * s;
      const is = im * s;
      r0 += re;
      i0 += im;
      r1 += rs;
      i1 += is;
      r2 += re * square;
      i2 += im * square;
      r3 += rs * square;
      i3 += is * square;
    }
    return [r0, i0, r1, i1, r2, i2, r3, i3, 0];
  }

  /** The same of two components, by the moments of the component along the tone. */
  #momentsOfTwo(g: ArrayLike<number>): readonly number[] {
    const { times, weights } = this.#samples;
    const [h, v] = weights;
    const field = this.#field;
    const along = new Float64Array(2 * times.length);
    let across = 0;
    for (let i = 0, k = 0; i < times.length; i++, k += 2) {
      const at = 2 * k;
      along[k] = h * g[at] + v * g[at + 2];
      along[k + 1] = h * g[at + 1] + v * g[at + 3];
      across += (h * g[at + 2] - v * g[at]) * field[k] + (h * g[at + 3] - v * g[at + 1]) * field[k + 1];
    }
    const moments = [...this.#momentsOfOne(along)];
    moments[8] = across;
    return moments;
  }
}
