import { HBAR } from '../../units/constants.js';
import type { Tone } from '../contract.js';
import type { EnvelopeSlopes } from '../shapes/contract.js';
import type { ToneSampler } from '../tones.js';
import type { ToneAdjoint, ToneSamples } from './contract.js';
import { AREA, DELAY, DETUNING, FWHM, GDD, PHASE, POLARIZATION, TOD } from './layout.js';

/** Numbers per sample: the field of area 1, and its slopes over it by time, FWHM, GDD and TOD. */
const WIDTH = 10;

/** Derivatives of a tone in closed form: every one is the tone's field times a factor known in closed form. */
export class ClosedToneAdjoint implements ToneAdjoint {
  readonly #tone: Tone;
  readonly #samples: ToneSamples;
  readonly #table: Float64Array;

  /** @param unit samples the tone with area 1 and weight 1 */
  constructor(tone: Tone, unit: ToneSampler, slopes: EnvelopeSlopes, samples: ToneSamples) {
    const { times, acts } = samples;
    this.#tone = tone;
    this.#samples = samples;
    this.#table = new Float64Array(WIDTH * times.length);
    const ratios = new Float64Array(8);
    const field = new Float64Array(2);
    for (let i = 0; i < times.length; i++) {
      if (!acts(i)) continue;
      field.fill(0);
      unit.add(times[i], field);
      slopes(times[i] - tone.delay, ratios);
      this.#table.set(field, WIDTH * i);
      this.#table.set(ratios, WIDTH * i + 2);
    }
  }

  add(g: ArrayLike<number>, into: Float64Array, slot: number): void {
    const { times, components, weights } = this.#samples;
    const table = this.#table;
    const [h, v] = components === 1 ? [1, 0] : weights;
    const width = 2 * components;
    const second = width - 2;
    let [area, phase, detuning, across, delay, fwhm, gdd, tod] = [0, 0, 0, 0, 0, 0, 0, 0];
    for (let i = 0; i < times.length; i++) {
      const at = width * i;
      const k = WIDTH * i;
      const ur = table[k];
      const ui = table[k + 1];
      const gr = h * g[at] + v * g[at + second];
      const gi = h * g[at + 1] + v * g[at + second + 1];
      const re = gr * ur + gi * ui;
      const im = gr * ui - gi * ur;
      area += re;
      phase += im;
      detuning += im * times[i];
      delay += re * table[k + 2] - im * table[k + 3];
      fwhm += re * table[k + 4] - im * table[k + 5];
      gdd += re * table[k + 6] - im * table[k + 7];
      tod += re * table[k + 8] - im * table[k + 9];
      if (second > 0) across += (h * g[at + 2] - v * g[at]) * ur + (h * g[at + 3] - v * g[at + 1]) * ui;
    }
    const strength = this.#tone.area;
    into[slot + AREA] += area;
    into[slot + PHASE] -= strength * phase;
    into[slot + DETUNING] += (strength * detuning) / HBAR;
    into[slot + POLARIZATION] += strength * across;
    into[slot + DELAY] -= strength * delay;
    into[slot + FWHM] += strength * fwhm;
    into[slot + GDD] += strength * gdd;
    into[slot + TOD] += strength * tod;
  }
}
