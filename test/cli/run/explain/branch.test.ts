import { describe, expect, it } from 'vitest';
import { branchOf } from '../../../../cli/run/explain/branch.js';
import type { Tone } from '../../../../core/index.js';
import { cascadeEmitter, design, tone, twoLevelEmitter } from '../../../support.js';

// Common names of excitation schemes (common practice, no single source).

const bare = (...tones: Partial<Tone>[]) => branchOf(design(twoLevelEmitter(), tones.map(tone)));
const cascade = (reference: 'exciton' | 'two-photon', ...tones: Partial<Tone>[]) => {
  const base = design(cascadeEmitter(), tones.map(tone));
  return branchOf({ ...base, pulse: { ...base.pulse, reference } });
};
const PI = Math.PI;

describe('the name of an excitation', () => {
  it.each<[string, Partial<Tone>]>([
    ['resonant, near π', { area: 0.87 * PI }],
    ['resonant, near π', { area: PI, detuning: 0.05 }],
    ['resonant, near 3π', { area: 3.2 * PI }],
    ['resonant, below π/2', { area: 0.3 * PI }],
    ['chirped up, resonant', { area: 4 * PI, gdd: 40 }],
    ['chirped down, resonant', { area: 4 * PI, gdd: -40 }],
    ['resonant, near π', { area: PI, gdd: 0.5 }],
    ['dispersed, resonant', { area: PI, fwhm: 2, tod: 60 }],
    ['detuned above the exciton line', { area: 9, detuning: 3 }],
    ['detuned below the exciton line', { area: 9, detuning: -3 }],
    ['chirped up, detuned above the exciton line', { area: 9, detuning: 3, gdd: 40 }],
    ['no pulse', { area: 0 }],
  ])('%s', (name, one) => expect(bare(one)).toBe(name));

  it.each<[string, Partial<Tone>, Partial<Tone>]>([
    ['two-colour, both below the exciton line', { detuning: -5 }, { detuning: -11 }],
    ['two-colour, both above the exciton line', { detuning: 5 }, { detuning: 11 }],
    ['two-colour, on both sides of the exciton line', { detuning: -4 }, { detuning: 4 }],
    ['two-colour, both below the exciton line, chirped', { detuning: -5, gdd: 60 }, { detuning: -11 }],
    ['two pulses of one colour, resonant', {}, { delay: 20 }],
    // A tone that carries nothing gives no name.
    ['resonant, near π', {}, { detuning: -8, area: 0.001 }],
  ])('%s', (name, first, second) => expect(bare(first, second)).toBe(name));

  it('counts from the resonance that is nearest: half the binding energy lies between line and two-photon resonance', () => {
    expect(cascade('two-photon', { area: 9, fwhm: 10 })).toBe('two-photon resonant');
    expect(cascade('exciton', { fwhm: 10 })).toBe('resonant, near π');
    const { binding } = cascadeEmitter();
    expect(cascade('exciton', { fwhm: 10, detuning: -(binding ?? 0) / 2 })).toBe('two-photon resonant');
    expect(cascade('two-photon', { fwhm: 10, detuning: -0.6 })).toBe(
      'detuned below the two-photon resonance',
    );
  });
});
