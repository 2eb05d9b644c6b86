import { FourierPlan, type UniformTable } from '../../numerics/index.js';
import { HBAR } from '../../units/constants.js';
import type { Tone } from '../contract.js';
import { type DispersedEnvelope, overBand } from '../dispersed.js';
import { pulseShape } from '../shapes/registry.js';
import type { ToneAdjoint } from './contract.js';
import { AREA, DELAY, DETUNING, FWHM, GDD, PHASE, POLARIZATION, TOD } from './layout.js';

/** Sums per scalar: Re ḡU, Im ḡU, Im ḡU·t, Re of the component across. */
const SUMS = 4;

/**
 * Derivatives of a tone that is read from a table. What changes the spectrum (delay, width, dispersion) goes the way of
 * the table backwards: samples are spread over the table, transformed, and meet the spectrum's own derivatives.
 */
export class SpectralToneAdjoint implements ToneAdjoint {
  readonly #tone: Tone;
  readonly #envelope: DispersedEnvelope;
  readonly #table: UniformTable;
  readonly #rate: number;
  readonly #sums: Float64Array;
  readonly #grids: Float64Array[];
  readonly #value = new Float64Array(2);
  #inside = false;
  #cos = 1;
  #sin = 0;

  /** @param frame 1/ps, relative to the pulse reference */
  constructor(tone: Tone, envelope: DispersedEnvelope, frame: number, scalars: number) {
    this.#tone = tone;
    this.#envelope = envelope;
    this.#table = envelope.table;
    this.#rate = tone.detuning / HBAR - frame;
    this.#sums = new Float64Array(SUMS * scalars);
    this.#grids = Array.from({ length: scalars }, () => new Float64Array(2 * envelope.table.length));
  }

  prepare(t: number): void {
    const s = t - this.#tone.delay;
    this.#inside = s >= this.#envelope.start && s <= this.#envelope.end;
    if (!this.#inside) return;
    this.#table.read(s, this.#value);
    const angle = this.#tone.phase - this.#rate * t;
    this.#cos = Math.cos(angle);
    this.#sin = Math.sin(angle);
  }

  add(t: number, scalar: number, along: readonly [number, number], across: readonly [number, number]): void {
    if (!this.#inside) return;
    const [a, b] = this.#value;
    const ur = this.#cos * a - this.#sin * b;
    const ui = this.#cos * b + this.#sin * a;
    const im = along[0] * ui - along[1] * ur;
    const s = this.#sums;
    const at = SUMS * scalar;
    s[at] += along[0] * ur + along[1] * ui;
    s[at + 1] += im;
    s[at + 2] += im * t;
    s[at + 3] += across[0] * ur + across[1] * ui;
    // ḡ times the carrier: what multiplies a change of the envelope.
    const re = along[0] * this.#cos + along[1] * this.#sin;
    const carried = along[0] * this.#sin - along[1] * this.#cos;
    this.#table.spread(t - this.#tone.delay, re, carried, this.#grids[scalar]);
  }

  finish(scalar: number, into: Float64Array, slot: number): void {
    const { area } = this.#tone;
    const s = this.#sums;
    const at = SUMS * scalar;
    into[slot + AREA] += s[at];
    into[slot + PHASE] -= area * s[at + 1];
    into[slot + DETUNING] += (area * s[at + 2]) / HBAR;
    into[slot + POLARIZATION] += area * s[at + 3];
    this.#finishSpectrum(this.#grids[scalar], into, slot);
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
