import { describe, expect, it } from 'vitest';
import { differentiateBy } from '../../../core/gradient.js';
import type { Design } from '../../../core/index.js';
import { applyParameters } from '../../../optimizers/problem/path.js';
import { cascadeEmitter, design, tone, twoLevelEmitter } from '../../support.js';
import { adjointKernel } from './adjoint-kernel.js';

// Rows against central differences of the same slow kernel's values (common practice, no source).

const laser = { repetition: null, piPulse: { energy: 12, fwhm: 5 }, rejection: 1e-6 };
const leaky = (changes: Partial<Design['collection']> = {}) => ({
  laser,
  collection: {
    line: 'exciton' as const,
    polarization: 'crossed' as const,
    efficiency: 0.7,
    filter: null,
    ...changes,
  },
});
const filter = { fwhm: 40, center: 3 };

const COUNTS = [
  'collected.multiphoton',
  'collected.g2',
  'signal.single',
  'signal.any',
  'signal.mean',
  'collected.leakage',
];
const EMITTED = ['emitted.g2', 'emitted.p.0', 'emitted.multiphoton'];
const PULSE = [
  'pulse.energy_pi_units',
  'pulse.energy_fj',
  'pulse.duration_ps',
  'pulse.bandwidth_ghz',
  'pulse.peak_rabi_per_ps',
];

interface Row {
  readonly name: string;
  /** Steps of the slow kernel. */
  readonly steps: number;
  readonly design: Design;
  readonly figures: readonly string[];
  readonly parameters: readonly string[];
}

const TONE = ['fwhm', 'area', 'detuning', 'delay', 'phase', 'polarization', 'gdd', 'tod'];
const ofTone = (k: number, keys: readonly string[] = TONE) => keys.map((key) => `pulse.tones.${k}.${key}`);
const FILTER = ['collection.filter.fwhm', 'collection.filter.center'];

const ROWS: readonly Row[] = [
  {
    name: 'two levels, emitted, leaking',
    steps: 24,
    design: design(
      twoLevelEmitter({ dephasing: 0.01 }),
      [tone({ area: 2.6, detuning: 0.05, gdd: 2 })],
      leaky(),
    ),
    figures: [...COUNTS, ...EMITTED, ...PULSE],
    parameters: ofTone(0),
  },
  {
    name: 'two levels, filtered, leaking, two tones',
    steps: 20,
    design: design(
      twoLevelEmitter({ lifetime: 100 }),
      [
        tone({ area: 2, detuning: 0.1 }),
        tone({ shape: 'sech', area: 1, delay: 3, phase: 1, polarization: 0.6 }),
      ],
      leaky({ filter }),
    ),
    figures: [...COUNTS, ...EMITTED, 'filtered.multiphoton', 'filtered.p.0', 'filtered.g2', ...PULSE],
    parameters: [
      ...ofTone(0, ['fwhm', 'area', 'detuning']),
      ...ofTone(1, ['delay', 'phase', 'polarization', 'tod']),
      ...FILTER,
    ],
  },
  {
    name: 'two levels, no losses, drift of area and width',
    steps: 24,
    design: design(twoLevelEmitter(), [tone({ area: 2.8, detuning: 0.02 })], {
      drift: { area: 0.04, width: 0.02, detuning: 0, filterCenter: 0, quantile: null },
    }),
    figures: [
      'collected.g2',
      'signal.any',
      'emitted.multiphoton',
      'pulse.energy_pi_units',
      'nominal.signal.single',
      'nominal.collected.g2',
    ],
    parameters: ofTone(0, ['fwhm', 'area', 'detuning']),
  },
  {
    name: 'cascade, h line',
    steps: 150,
    design: design(
      cascadeEmitter({ splitting: 0.02 }),
      [tone({ fwhm: 4, area: 9, polarization: 0.2, detuning: 0.1 })],
      {
        pulse: {
          reference: 'two-photon',
          tones: [tone({ fwhm: 4, area: 9, polarization: 0.2, detuning: 0.1 })],
        },
        collection: { line: 'exciton', polarization: 'h', efficiency: 0.8, filter: null },
      },
    ),
    figures: ['collected.multiphoton', 'signal.single', 'emitted.g2'],
    parameters: ofTone(0, ['fwhm', 'area', 'detuning', 'polarization', 'gdd']),
  },
];

function moved(base: Design, path: string, by: number): Design {
  const keys = path.split('.');
  const value = keys.reduce<unknown>((node, key) => (node as Record<string, unknown>)[key], base) as number;
  const parameters = [{ kind: 'list' as const, path, values: [value] }];
  const spec = { design: base, parameters, ties: [] } as unknown as Parameters<typeof applyParameters>[0];
  return applyParameters(spec, [value + by]);
}

const at = (tree: unknown, path: string): number =>
  path.split('.').reduce<unknown>((node, key) => (node as Record<string, unknown>)[key], tree) as number;

describe('chain from samples of the drive to figures', () => {
  it.each(ROWS)('$name', { timeout: 120_000 }, ({ design: base, steps, figures, parameters }) => {
    const evaluateBy = differentiateBy(adjointKernel(steps));
    const { figures: tree, rows } = evaluateBy(base, figures, parameters);
    expect(rows).not.toBeNull();
    parameters.forEach((path, k) => {
      const h = path.includes('filter') ? 0.2 : 2e-3;
      const [p1, m1, p2, m2] = [h, -h, 2 * h, -2 * h].map(
        (by) => evaluateBy(moved(base, path, by), [], []).figures,
      );
      figures.forEach((figure, j) => {
        const slope = (8 * (at(p1, figure) - at(m1, figure)) - (at(p2, figure) - at(m2, figure))) / (12 * h);
        const size = Math.abs(at(tree, figure)) + Math.abs(slope);
        expect(
          Math.abs(rows![j][k] - slope) / size,
          `${figure} by ${path}: ${rows![j][k]} against ${slope}`,
        ).toBeLessThan(2e-6);
      });
    });
  });
});
