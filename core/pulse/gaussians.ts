import { HBAR } from '../units/constants.js';
import type { Tone } from './contract.js';
import { pulseShape } from './shapes/registry.js';

/**
 * A tone as one complex Gaussian: Ω(t) = amplitude·exp(−fall·s² + i(phase − rate·s + chirp·s²)), s = t − delay, of full
 * strength (polarisation left out).
 */
export interface GaussianTone {
  /** 1/ps; of either sign. */
  readonly amplitude: number;
  /** 1/ps². */
  readonly fall: number;
  /** rad. */
  readonly phase: number;
  /** 1/ps, in the drive's frame. */
  readonly rate: number;
  /** rad/ps². */
  readonly chirp: number;
  /** ps. */
  readonly delay: number;
}

/** Every tone as a Gaussian, or null where one of them is none. `frame` in 1/ps as in `Drive.frame`. */
export function gaussianTones(tones: readonly Tone[], frame: number): readonly GaussianTone[] | null {
  const out: GaussianTone[] = [];
  for (const tone of tones) {
    const closed = tone.tod === 0 ? pulseShape(tone.shape).dispersed?.(tone.fwhm, tone.gdd) : undefined;
    if (closed?.fall === undefined) return null;
    const rate = tone.detuning / HBAR - frame;
    out.push({
      amplitude: tone.area * closed.peak,
      fall: closed.fall,
      phase: (tone.phase + closed.phase - rate * tone.delay) % (2 * Math.PI),
      rate,
      chirp: closed.chirp,
      delay: tone.delay,
    });
  }
  return out;
}
