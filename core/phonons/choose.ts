import type { Drive } from '../pulse/drive.js';
import type { Bath } from './bath.js';

export interface Choice {
  readonly method: 'polaron' | 'weak-coupling';
  /** Which, why, and what error was measured for such drives, as one phrase. */
  readonly reason: string;
}

/** Peak Rabi frequency over ω_c from which a detuned drive counts as faster than the bath. */
const FAST = 0.4;
/** Peak Rabi frequency over ω_c up to which resonant drives were compared with the exact method. */
const COMPARED = 0.6;

/**
 * Chooses between the second-order methods (accuracy against the hierarchy measured on resonant, chirped, detuned, two-colour
 * and two-photon pulses at 4 and 10 K, A = 0.03 ps², ω_c = 2.2 1/ps): the polaron transformation follows slow and resonant
 * drives, but its displaced bath cannot follow a detuned drive that is much faster than the bath.
 * @param offsets detunings of the tones from the resonance they drive, 1/ps
 */
export function chooseMethod(drive: Drive, bath: Bath, offsets: readonly number[]): Choice {
  const speed = drive.scales.peakRabi / bath.cutoff;
  const detuned = offsets.some((offset) => Math.abs(offset) > 0.1 * bath.cutoff);
  const ratio = `peak Rabi frequency ${speed.toFixed(2)} of the bath's cutoff`;
  if (detuned && offsets.length > 1 && speed > FAST) {
    return {
      method: 'weak-coupling',
      reason: `auto: weak-coupling, for a detuned drive faster than the bath (${ratio}); measured error of populations 1e-3`,
    };
  }
  if (detuned && speed > FAST) {
    return {
      method: 'weak-coupling',
      reason: `auto: weak-coupling, for a detuned drive faster than the bath (${ratio}); measured error of populations 2e-3 to 3e-3`,
    };
  }
  const error = speed <= COMPARED && !detuned ? '5e-4 (2e-3 at areas of several pi)' : '1e-2';
  return {
    method: 'polaron',
    reason: `auto: polaron, for a ${detuned ? 'detuned drive slower than the bath' : 'resonant drive'} (${ratio}); measured error of populations ${error}`,
  };
}
