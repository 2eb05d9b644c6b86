import { HBAR } from '../units/constants.js';
import type { Tone } from './contract.js';
import { pulseShape } from './shapes/registry.js';

/** Spectral field of one tone, E(ω) = amplitude(ν)·e^{i phase(ν)} with ν = ω − center; dimensionless. */
export interface ToneSpectrum {
  /** 1/ps, relative to the pulse reference. */
  readonly center: number;
  amplitude(nu: number): number;
  /** Largest |amplitude| at or beyond |ν|. */
  bound(nu: number): number;
  /** rad. */
  phase(nu: number): number;
  /** dφ/dω with the delay, ps. */
  groupDelay(nu: number): number;
  /** |ν| beyond which |amplitude| < eps·area, 1/ps. */
  reach(eps: number): number;
}

/** Dispersion in internal units. */
export interface Dispersion {
  /** ps². */
  readonly gdd: number;
  /** ps³. */
  readonly tod: number;
}

/** ½·GDD·ν² + ⅙·TOD·ν³, rad. */
export function dispersionPhase({ gdd, tod }: Dispersion, nu: number): number {
  return (gdd / 2 + (tod / 6) * nu) * nu * nu;
}

/** GDD·ν + ½·TOD·ν², ps. */
export function dispersionDelay({ gdd, tod }: Dispersion, nu: number): number {
  return (gdd + 0.5 * tod * nu) * nu;
}

/** Earliest and latest group delay of a band |ν| ≤ reach, ps. */
export function delayRange(dispersion: Dispersion, reach: number): readonly [number, number] {
  const delays = [0, dispersionDelay(dispersion, reach), dispersionDelay(dispersion, -reach)];
  const turning = -dispersion.gdd / dispersion.tod;
  if (Math.abs(turning) < reach) delays.push(dispersionDelay(dispersion, turning));
  return [Math.min(...delays), Math.max(...delays)];
}

/** Spectrum of a tone: its area is the value at the centre; dispersion changes the phase only. */
export function toneSpectrum(tone: Tone): ToneSpectrum {
  const shape = pulseShape(tone.shape);
  return {
    center: tone.detuning / HBAR,
    amplitude: (nu) => tone.area * shape.spectrum(nu, tone.fwhm),
    bound: (nu) => Math.abs(tone.area) * shape.spectralBound(nu, tone.fwhm),
    phase: (nu) => tone.phase + dispersionPhase(tone, nu) + nu * tone.delay,
    groupDelay: (nu) => dispersionDelay(tone, nu) + tone.delay,
    reach: (eps) => shape.spectralReach(tone.fwhm, eps),
  };
}
