import {
  type Fault,
  formatFault,
  type Override,
  readStudy,
  type StudyResult,
} from '../../../cli/study/index.js';

export const read = (text: string, overrides: readonly Override[] = []): StudyResult =>
  readStudy(new TextEncoder().encode(text), 'study.yaml', overrides);

/** The valid study, or an error with its faults. */
export function studyOf(text: string, overrides: readonly Override[] = []) {
  const result = read(text, overrides);
  if (result.kind === 'faults') throw new Error(result.faults.map(formatFault).join('\n'));
  return result;
}

export function faultsOf(text: string, overrides: readonly Override[] = []): readonly Fault[] {
  const result = read(text, overrides);
  return result.kind === 'faults' ? result.faults : [];
}

export const printed = (text: string, overrides: readonly Override[] = []): string[] =>
  faultsOf(text, overrides).map(formatFault);

/** The smallest study; line 1 is the version. */
export const MINIMAL = `pulsewright: 1
emitter:
  model: two-level
  lifetime: 400 ps
pulse:
  tones:
    - fwhm: 5 ps
      area: 1 pi
`;

/** Every key of the format with a value that is not its default. */
export const COMPLETE = `pulsewright: 1
title: Every key
emitter:
  model: cascade
  wavelength: 925.3 nm
  lifetime: 400 ps
  biexciton_lifetime: 210 ps
  binding: 2.4 meV
  splitting: 8 ueV
  dephasing: 0.1 1/ns
  phonons:
    coupling: 0.03 ps^2
    cutoff: 2.2 1/ps
    temperature: 4 K
    method: exact
  tuning: { slope: 5 ueV/mV, bias: 200 mV, range: [100 mV, 260 mV] }
pulse:
  reference: two-photon
  tones:
    - shape: sech
      fwhm: { from: 2 ps, to: 40 ps, scale: log }
      area: { from: 0.5 pi, to: 3 pi }
      detuning: 0.2 meV
      gdd: { of: [0 ps^2, 10 ps^2, 25 ps^2] }
      tod: 3 ps^3
      delay: 1 ps
      phase: 30 deg
      polarization: 45 deg
    - shape: square
      fwhm: { same_as: tones.0.fwhm }
      area: 2 pi
      delay: { from: -5 ps, to: 50 ps }
collection:
  line: biexciton
  polarization: h
  efficiency: 65 %
  filter: { fwhm: 30 GHz, center: { from: -5 GHz, to: 5 GHz } }
laser:
  repetition: 76 MHz
  pi_pulse: { energy: 12 fJ, fwhm: 5 ps }
  rejection: 1e-6
goal:
  impurity: g2
  brightness: any
  at_least: 0.60
  front: { from: 0.40, to: 0.64, points: 9 }
  third: { axis: energy, slices: 3 }
  limits:
    pulse.energy_pi_units: { at_most: 12 }
    pulse.energy_fj: { at_most: 0.15 pJ }
    pulse.peak_rabi_per_ps: { at_most: 2.5 rad/ps }
    collected.leakage: { at_most: 0.1 % }
    pulse.duration_ps: { at_least: 2 ps, at_most: 30 ps }
drift:
  area: 2 %
  width: 1 %
  detuning: 5 ueV
  filter_center: 1 GHz
  judge: quantile
  quantile: 95 %
search: { evaluations: 200, seed: 7, method: nsga2 }
`;
