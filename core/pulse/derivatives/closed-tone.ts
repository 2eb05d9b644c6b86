import { HBAR } from '../../units/constants.js';
import type { Tone } from '../contract.js';
import type { EnvelopeSlopes } from '../shapes/contract.js';
import type { ToneSampler } from '../tones.js';
import type { ToneAdjoint } from './contract.js';
import { AREA, DELAY, DETUNING, FWHM, GDD, PHASE, POLARIZATION, TOD } from './layout.js';

/** Sums per scalar: Re ḡU, Im ḡU, Im ḡU·t, Re of the component across, Re ḡU·slope for time, FWHM, GDD and TOD. */
const SUMS = 8;

/** Derivatives of a tone in closed form: every one is the tone's field times a factor known in closed form. */
export class ClosedToneAdjoint implements ToneAdjoint {
  readonly #tone: Tone;
  readonly #unit: ToneSampler;
  readonly #slopes: EnvelopeSlopes;
  readonly #sums: Float64Array;
  readonly #field = new Float64Array(2);
  readonly #ratios = new Float64Array(8);

  /** @param unit samples the tone with area 1 and weight 1 */
  constructor(tone: Tone, unit: ToneSampler, slopes: EnvelopeSlopes, scalars: number) {
    this.#tone = tone;
    this.#unit = unit;
    this.#slopes = slopes;
    this.#sums = new Float64Array(SUMS * scalars);
  }

  prepare(t: number): void {
    this.#field.fill(0);
    this.#unit.add(t, this.#field);
    this.#slopes(t - this.#tone.delay, this.#ratios);
  }

  add(t: number, scalar: number, along: readonly [number, number], across: readonly [number, number]): void {
    const [ur, ui] = this.#field;
    const r = this.#ratios;
    const s = this.#sums;
    const at = SUMS * scalar;
    const re = along[0] * ur + along[1] * ui;
    const im = along[0] * ui - along[1] * ur;
    s[at] += re;
    s[at + 1] += im;
    s[at + 2] += im * t;
    s[at + 3] += across[0] * ur + across[1] * ui;
    s[at + 4] += re * r[0] - im * r[1];
    s[at + 5] += re * r[2] - im * r[3];
    s[at + 6] += re * r[4] - im * r[5];
    s[at + 7] += re * r[6] - im * r[7];
  }

  finish(scalar: number, into: Float64Array, slot: number): void {
    const { area } = this.#tone;
    const s = this.#sums;
    const at = SUMS * scalar;
    into[slot + AREA] += s[at];
    into[slot + PHASE] -= area * s[at + 1];
    into[slot + DETUNING] += (area * s[at + 2]) / HBAR;
    into[slot + POLARIZATION] += area * s[at + 3];
    into[slot + DELAY] -= area * s[at + 4];
    into[slot + FWHM] += area * s[at + 5];
    into[slot + GDD] += area * s[at + 6];
    into[slot + TOD] += area * s[at + 7];
  }
}
