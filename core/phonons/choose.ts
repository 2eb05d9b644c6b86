import type { Drive } from '../pulse/drive.js';
import type { Bath } from './bath.js';

export interface Choice {
  readonly method: 'polaron' | 'weak-coupling';
  /** Which, why, and what error was measured for such drives, as one phrase. */
  readonly reason: string;
  /** Largest error of populations that was measured for such drives. */
  readonly error: number;
}

/** What the choice needs to know of a pulse. */
export interface DriveKind {
  /** Distance of each tone from the nearest resonance that it can drive, 1/ps. */
  readonly offsets: readonly number[];
  readonly chirped: boolean;
}

/** Peak Rabi frequency over ω_c from which a detuned drive counts as faster than the bath. */
const FAST = 0.4;
/** The same for a warm bath, where slower drives are better served by the polaron frame. */
const FAST_WHEN_WARM = 2;
/** Distance from resonance over ω_c from which a tone counts as detuned. */
const DETUNED = 0.1;
/** Temperatures up to which errors were measured as small, K. */
const COLD = 10;
const COOL = 20;

/**
 * Chooses between the second-order methods, by their errors against the hierarchy of auxiliary operators for A = 0.03 ps²,
 * ω_c = 2.2 1/ps at 4 to 77 K (resonant, chirped, detuned, two-colour and two-photon pulses): the polaron transformation is
 * the better one for resonant drives of any speed and for slow detuned ones, but its displaced bath cannot follow a
 * detuned drive that is much faster than the bath.
 */
export function chooseMethod(drive: Drive, bath: Bath, kind: DriveKind): Choice {
  const speed = drive.scales.peakRabi / bath.cutoff;
  const detuned = kind.offsets.some((offset) => Math.abs(offset) > DETUNED * bath.cutoff);
  const fast = speed > (bath.temperature > COLD ? FAST_WHEN_WARM : FAST);
  const method = detuned && fast ? 'weak-coupling' : 'polaron';
  const what = kind.chirped ? 'a chirped drive' : detuned ? 'a detuned drive' : 'a resonant drive';
  const pace = detuned ? (fast ? ' faster than the bath' : ' slower than the bath') : '';
  const { error, where } = errorClass(bath.temperature, kind.chirped, detuned, speed);
  return {
    method,
    reason: `auto: ${method}, for ${what}${pace} (peak Rabi frequency ${speed.toFixed(2)} of the bath's cutoff); measured error of populations for this kind: up to ${error}${where}`,
    error,
  };
}

function errorClass(
  temperature: number,
  chirped: boolean,
  detuned: boolean,
  speed: number,
): { error: number; where: string } {
  if (temperature > COOL) return { error: 6e-2, where: ' (77 K)' };
  if (temperature > COLD) return { error: 4e-2, where: ' (20 K)' };
  if (detuned) return { error: 1e-2, where: '' };
  if (chirped) return { error: 4e-3, where: '' };
  return speed > 1 ? { error: 1.6e-2, where: ' (peak beyond the cutoff)' } : { error: 2e-3, where: '' };
}
