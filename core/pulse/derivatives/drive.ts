import { HBAR } from '../../units/constants.js';
import type { Tone } from '../contract.js';
import type { Envelope } from '../envelope.js';
import { polarizationWeights } from '../polarization.js';
import { pulseShape } from '../shapes/registry.js';
import { toneSampler } from '../tones.js';
import { ClosedToneAdjoint } from './closed-tone.js';
import type { ToneAdjoint } from './contract.js';
import { TONE_SLOTS } from './layout.js';
import { SpectralToneAdjoint } from './spectral-tone.js';

/** A tone with its envelope, as a drive has it. */
export interface EnvelopedTone {
  readonly tone: Tone;
  readonly envelope: Envelope;
}

/** Derivatives of scalars by samples of the drive. */
export interface SampleDerivatives {
  /** ps. */
  readonly times: ArrayLike<number>;
  /** Segment of the drive meant at each time. */
  readonly segments: ArrayLike<number>;
  /** Per scalar, laid out like the samples: re, im of each component, for each time. */
  readonly scalars: readonly ArrayLike<number>[];
}

function adjointOf({ tone, envelope }: EnvelopedTone, frame: number, scalars: number): ToneAdjoint | null {
  const { form } = envelope;
  if (form.kind === 'table') return new SpectralToneAdjoint(tone, form.dispersed, frame, scalars);
  const slopes = pulseShape(tone.shape).slopes(tone.fwhm, tone.gdd);
  if (slopes === null) return null;
  const { phase, delay } = tone;
  const place = { area: 1, phase, rate: tone.detuning / HBAR - frame, delay, weights: [1] };
  return new ClosedToneAdjoint(tone, toneSampler(envelope, place), slopes, scalars);
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
  const adjoints = tones.map((tone) => adjointOf(tone, drive.frame, scalars.length));
  if (!adjoints.every((adjoint) => adjoint !== null)) return false;
  const weights = tones.map(({ tone }) => polarizationWeights(tone.polarization));
  const along: [number, number] = [0, 0];
  const across: [number, number] = [0, 0];
  for (let i = 0; i < times.length; i++) {
    for (let k = 0; k < count; k++) {
      if (active[segments[i] * count + k] === 0) continue;
      const adjoint = adjoints[k];
      const [h, v] = weights[k];
      adjoint.prepare(times[i]);
      for (let j = 0; j < scalars.length; j++) {
        const g = scalars[j];
        if (drive.components === 1) {
          along[0] = g[2 * i];
          along[1] = g[2 * i + 1];
        } else {
          along[0] = h * g[4 * i] + v * g[4 * i + 2];
          along[1] = h * g[4 * i + 1] + v * g[4 * i + 3];
          across[0] = h * g[4 * i + 2] - v * g[4 * i];
          across[1] = h * g[4 * i + 3] - v * g[4 * i + 1];
        }
        adjoint.add(times[i], j, along, across);
      }
    }
  }
  into.forEach((vector, j) => {
    adjoints.forEach((adjoint, k) => {
      adjoint.finish(j, vector, TONE_SLOTS * k);
    });
  });
  return true;
}
