import { FourierPlan } from '../../numerics/index.js';
import { HBAR } from '../../units/constants.js';
import type { Tone } from '../contract.js';
import { type DispersedEnvelope, overBand } from '../dispersed.js';
import { pulseShape } from '../shapes/registry.js';
import type { ToneAdjoint, ToneSamples } from './contract.js';
import { AREA, DELAY, DETUNING, FWHM, GDD, PHASE, POLARIZATION, TOD } from './layout.js';

/**
 * Derivatives of a tone that is read from a table. What changes the spectrum (delay, width, dispersion) goes the way of
 * the table backwards: samples are spread over the table, transformed, and meet the spectrum's own derivatives.
 */
export class SpectralToneAdjoint implements ToneAdjoint {
  readonly #tone: Tone;
  readonly #envelope: DispersedEnvelope;
  readonly #samples: ToneSamples;
  readonly #rate: number;

  /** @param frame 1/ps, relative to the pulse reference */
  constructor(tone: Tone, envelope: DispersedEnvelope, frame: number, samples: ToneSamples) {
    this.#tone = tone;
    this.#envelope = envelope;
    this.#samples = samples;
    this.#rate = tone.detuning / HBAR - frame;
  }

  add(g: ArrayLike<number>, into: Float64Array, slot: number): void {
    const { times, acts, components, weights } = this.#samples;
    const { table, start, end } = this.#envelope;
    const { area, delay, phase } = this.#tone;
    const [h, v] = components === 1 ? [1, 0] : weights;
    const width = 2 * components;
    const second = width - 2;
    const value = new Float64Array(2);
    const grid = new Float64Array(2 * table.length);
    let [along, turned, timed, across] = [0, 0, 0, 0];
    for (let i = 0; i < times.length; i++) {
      const t = times[i];
      const s = t - delay;
      if (!acts(i) || s < start || s > end) continue;
      table.read(s, value);
      const at = width * i;
      const gr = h * g[at] + v * g[at + second];
      const gi = h * g[at + 1] + v * g[at + second + 1];
      const cos = Math.cos(phase - this.#rate * t);
      const sin = Math.sin(phase - this.#rate * t);
      const ur = cos * value[0] - sin * value[1];
      const ui = cos * value[1] + sin * value[0];
      const im = gr * ui - gi * ur;
      along += gr * ur + gi * ui;
      turned += im;
      timed += im * t;
      if (second > 0) across += (h * g[at + 2] - v * g[at]) * ur + (h * g[at + 3] - v * g[at + 1]) * ui;
      // ḡ times the carrier: what multiplies a change of the envelope.
      table.spread(s, gr * cos + gi * sin, gr * sin - gi * cos, grid);
    }
    into[slot + AREA] += along;
    into[slot + PHASE] -= area * turned;
    into[slot + DETUNING] += (area * timed) / HBAR;
    into[slot + POLARIZATION] += area * across;
    this.#finishSpectrum(grid, into, slot);
  }

  /** Σ_j Re(a_j dE_j) with E the transform of the spectrum: Σ_k Re(Â_k dS_k), Â the same transform of a. */
  #finishSpectrum(grid: Float64Array, into: Float64Array, slot: number): void {
    const { area, fwhm, shape: name } = this.#tone;
    const { origin } = this.#envelope;
    const shape = pulseShape(name);
    const padded = new Float64Array(2 * origin.size);
    padded.set(grid, 2 * origin.first);
    const spread = new FourierPlan(origin.size).forward(padded);
    let [delay, width, gdd, tod] = [0, 0, 0, 0];
    overBand(origin, this.#tone, (nu, k, weight, phase) => {
      const cos = weight * Math.cos(phase);
      const sin = weight * Math.sin(phase);
      const re = spread[k] * cos - spread[k + 1] * sin;
      const im = spread[k] * sin + spread[k + 1] * cos;
      const turned = -im * shape.spectrum(nu, fwhm);
      delay += turned * nu;
      gdd += (turned * nu * nu) / 2;
      tod += (turned * nu * nu * nu) / 6;
      // Every shape is a function of ν·fwhm.
      width += re * shape.spectrumSlope(nu, fwhm) * (nu / fwhm);
    });
    into[slot + DELAY] += area * delay;
    into[slot + FWHM] += area * width;
    into[slot + GDD] += area * gdd;
    into[slot + TOD] += area * tod;
  }
}
