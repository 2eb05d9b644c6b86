import type { Pulse, Tone } from '../../../core/pulse/contract.js';
import { tone } from '../../support.js';

export { tone };

/** A pulse of the given tones, counted from the exciton. */
export function pulse(...tones: Partial<Tone>[]): Pulse {
  return { reference: 'exciton', tones: tones.map(tone) };
}
