import type { Design, PhononSpec } from '../../../core/design.js';
import { collectedDipoles } from '../../../core/emitter/generator.js';
import type { CountRequest } from '../../../core/kernels/count.js';
import type { Tone } from '../../../core/pulse/contract.js';
import { situation } from '../../../core/situation.js';
import { cascadeEmitter, design, tone, twoLevelEmitter } from '../../support.js';

/** The bath of the tables: A = 0.03 ps², ω_c = 2.2 1/ps. */
export function phonons(temperature: number, changes: Partial<PhononSpec> = {}): PhononSpec {
  return { coupling: 0.03, cutoff: 2.2, temperature, method: 'exact', ...changes };
}

/** Lifetime that stands for no decay at all, ps. */
export const FOREVER = 1e12;

export function requestOf(d: Design, changes: Partial<CountRequest> = {}): CountRequest {
  const where = situation(d);
  return {
    scheme: where.scheme,
    dipoles: collectedDipoles(where.scheme, 'exciton', 'all'),
    drive: where.drive,
    frame: where.frame,
    shift: 0,
    thinning: null,
    filter: null,
    effort: { tolerance: 1e-10, parts: 1, nodes: 1, series: 'estimate' },
    ...changes,
  };
}

export function twoLevelRequest(
  tones: readonly Partial<Tone>[],
  lifetime = FOREVER,
  changes: Partial<CountRequest> = {},
): CountRequest {
  return requestOf(design(twoLevelEmitter({ lifetime }), tones.map(tone)), changes);
}

const PI = Math.PI;
/** FWHM of the intensity over the field's σ of a Gaussian. */
const FWHM_PER_SIGMA = 2 * Math.sqrt(Math.LN2);

export interface Row {
  readonly name: string;
  readonly tones: readonly Partial<Tone>[];
  readonly temperature: number;
  /** Excited-state population after the pulse without decay: weak-coupling, polaron, exact. */
  readonly expected: readonly [number, number, number];
}

/**
 * Excited-state populations computed beforehand with a separate code of the same three methods, without decay
 * (A = 0.03 ps², ω_c = 2.2 1/ps). The last is the published two-colour swing-up pair (Bracht et al., PRX Quantum 2, 040354
 * (2021)) in the same bath.
 */
export const ROWS: readonly Row[] = [
  { name: 'π, 2 ps', tones: [{ fwhm: 2 }], temperature: 4, expected: [0.97958, 0.97677, 0.97725] },
  { name: 'π, 5 ps', tones: [{ fwhm: 5 }], temperature: 4, expected: [0.99398, 0.9872, 0.9873] },
  { name: 'π, 10 ps', tones: [{ fwhm: 10 }], temperature: 4, expected: [0.9988, 0.99093, 0.99096] },
  { name: 'π, 20 ps, 10 K', tones: [{ fwhm: 20 }], temperature: 10, expected: [0.986, 0.97938, 0.97943] },
  {
    name: '5π, 10 ps',
    tones: [{ fwhm: 10, area: 5 * PI }],
    temperature: 4,
    expected: [0.79254, 0.79475, 0.79648],
  },
  {
    name: '12π, 15 ps, 1 meV above',
    tones: [{ fwhm: 15, area: 12 * PI, detuning: 1 }],
    temperature: 4,
    expected: [0.81879, 0.8116, 0.82047],
  },
  {
    name: '4π, 2 ps, +20 ps²',
    tones: [{ fwhm: 2, area: 4 * PI, gdd: 20 }],
    temperature: 4,
    expected: [0.90913, 0.90836, 0.90479],
  },
  {
    name: '4π, 2 ps, −20 ps²',
    tones: [{ fwhm: 2, area: 4 * PI, gdd: -20 }],
    temperature: 4,
    expected: [0.23326, 0.26642, 0.26327],
  },
  {
    name: 'two tones',
    tones: [
      { fwhm: 2.4 * FWHM_PER_SIGMA, area: 22.65 * PI, detuning: -8 },
      { fwhm: 3.04 * FWHM_PER_SIGMA, area: 19.29 * PI, detuning: -19.163 },
    ],
    temperature: 4,
    expected: [0.98029, 0.91956, 0.97935],
  },
];

/** Two-photon excitation: ⟨n⟩ of the exciton line (both polarisations), 4 K. */
export const CASCADE_EXPECTED = [0.9774, 0.8897, 0.8901] as const;

export function cascadeRequest(changes: Partial<CountRequest> = {}): CountRequest {
  const emitter = cascadeEmitter({
    lifetime: 320,
    biexcitonLifetime: 170,
    binding: 3.1,
    splitting: 0.012,
  });
  const pulse = { reference: 'two-photon' as const, tones: [tone({ fwhm: 9, area: 5.4 * PI })] };
  return requestOf(design(emitter, pulse.tones, { pulse }), changes);
}
