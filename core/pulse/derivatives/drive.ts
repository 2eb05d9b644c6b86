import { HBAR } from '../../units/constants.js';
import type { Tone } from '../contract.js';
import type { Envelope } from '../envelope.js';
import { gaussianTones } from '../gaussians.js';
import { polarizationWeights } from '../polarization.js';
import { pulseShape } from '../shapes/registry.js';
import { toneSampler } from '../tones.js';
import { ClosedToneAdjoint } from './closed-tone.js';
import type { SampleDerivatives, ToneAdjoint, ToneSamples } from './contract.js';
import { GaussianToneAdjoint } from './gaussian-tone.js';
import { TONE_SLOTS } from './layout.js';
import { SpectralToneAdjoint } from './spectral-tone.js';

/** A tone with its envelope, as a drive has it. */
export interface EnvelopedTone {
  readonly tone: Tone;
  readonly envelope: Envelope;
}

function adjointOf(
  { tone, envelope }: EnvelopedTone,
  frame: number,
  samples: ToneSamples,
): ToneAdjoint | null {
  const { form } = envelope;
  if (form.kind === 'table') return new SpectralToneAdjoint(tone, form.dispersed, frame, samples);
  const gaussian = gaussianTones([tone], frame);
  if (gaussian) return new GaussianToneAdjoint(tone, gaussian[0], samples);
  const slopes = pulseShape(tone.shape).slopes(tone.fwhm, tone.gdd);
  if (slopes === null) return null;
  const { phase, delay } = tone;
  const place = { area: 1, phase, rate: tone.detuning / HBAR - frame, delay, weights: [1] };
  return new ClosedToneAdjoint(tone, toneSampler(envelope, place), slopes, samples);
}

/**
 * Adds the derivatives of scalars by the parameters of every tone (layout.ts) to one vector per scalar, from their
 * derivatives by samples of the drive at fixed frame and window.
 * @param active `active[segment·n + k]` is not 0 where tone k of n acts
 * @returns false, and adds nothing, where a tone has edges, which move with its parameters
 */
export function toneDerivatives(
  tones: readonly EnvelopedTone[],
  active: Uint8Array,
  drive: { readonly frame: number; readonly components: 1 | 2 },
  { times, segments, scalars }: SampleDerivatives,
  into: readonly Float64Array[],
): boolean {
  const count = tones.length;
  const { components } = drive;
  const adjoints = tones.map((at, k) => {
    const acts = count === 1 ? () => true : (i: number) => active[segments[i] * count + k] !== 0;
    const weights = polarizationWeights(at.tone.polarization);
    return adjointOf(at, drive.frame, { times, acts, components, weights });
  });
  if (!adjoints.every((adjoint) => adjoint !== null)) return false;
  scalars.forEach((scalar, j) => {
    adjoints.forEach((adjoint, k) => {
      adjoint.add(scalar, into[j], TONE_SLOTS * k);
    });
  });
  return true;
}
