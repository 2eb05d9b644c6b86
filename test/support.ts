import type { Design, EmitterSpec, Tone } from '../core/index.js';

/** A complete tone: a resonant transform-limited Gaussian π pulse of 5 ps, with changes. */
export function tone(changes: Partial<Tone> = {}): Tone {
  return {
    shape: 'gaussian',
    fwhm: 5,
    area: Math.PI,
    detuning: 0,
    gdd: 0,
    tod: 0,
    delay: 0,
    phase: 0,
    polarization: 0,
    ...changes,
  };
}

export function twoLevelEmitter(changes: Partial<EmitterSpec> = {}): EmitterSpec {
  return {
    model: 'two-level',
    wavelength: 0.93,
    lifetime: 500,
    biexcitonLifetime: null,
    binding: null,
    splitting: 0,
    dephasing: 0,
    phonons: null,
    ...changes,
  };
}

/** The cascade of the published-style tables: E_b 5 meV, lifetimes 400 and 200 ps. */
export function cascadeEmitter(changes: Partial<EmitterSpec> = {}): EmitterSpec {
  return twoLevelEmitter({ model: 'cascade', lifetime: 400, biexcitonLifetime: 200, binding: 5, ...changes });
}

/** A complete design around an emitter and tones; nothing is lost or leaked unless changed. */
export function design(emitter: EmitterSpec, tones: readonly Tone[], changes: Partial<Design> = {}): Design {
  return {
    emitter,
    pulse: { reference: 'exciton', tones },
    collection: { line: 'exciton', polarization: 'all', efficiency: 1, filter: null },
    laser: null,
    drift: null,
    ...changes,
  };
}
