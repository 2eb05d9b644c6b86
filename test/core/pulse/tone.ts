import type { Pulse, Tone } from '../../../core/pulse/contract.js';

/** A resonant Gaussian π pulse of 5 ps with the given changes. */
export function tone(part: Partial<Tone> = {}): Tone {
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
    ...part,
  };
}

/** A pulse of the given tones, counted from the exciton. */
export function pulse(...tones: Partial<Tone>[]): Pulse {
  return { reference: 'exciton', tones: tones.map(tone) };
}
