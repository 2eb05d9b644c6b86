import { describe, expect, it } from 'vitest';
import { type Design, evaluate, evaluateMany, type Figures, PropagationError } from '../../../core/index.js';
import { cascadeEmitter, design, tone, twoLevelEmitter } from '../../support.js';

const laser = { repetition: null, piPulse: { energy: 12, fwhm: 5 }, rejection: 1e-6 };
const path = (changes: Partial<Design['collection']> = {}) => ({
  line: 'exciton' as const,
  polarization: 'crossed' as const,
  efficiency: 0.7,
  filter: null,
  ...changes,
});
const filter = { fwhm: 40, center: 3 };
const drift = { area: 0.03, width: 0, detuning: 0.01, filterCenter: 0, quantile: 0.9 };

/** One of each kind: bases, emitters, drift, several tones. */
const DESIGNS: readonly Design[] = [
  design(twoLevelEmitter(), [tone()]),
  design(twoLevelEmitter(), [tone({ fwhm: 6, detuning: 0.1 })], { laser, collection: path() }),
  design(twoLevelEmitter(), [tone({ fwhm: 4 })], { laser, collection: path({ filter }) }),
  design(twoLevelEmitter({ dephasing: 0.01 }), [tone({ area: 12, fwhm: 30 })], {
    collection: path({ filter }),
  }),
  design(twoLevelEmitter(), [tone({ area: 9, detuning: -1.5 }), tone({ area: 8, detuning: -3, delay: 2 })]),
  design(cascadeEmitter(), [tone({ area: 9, fwhm: 6 })], {
    pulse: { reference: 'two-photon', tones: [tone({ area: 9, fwhm: 6 })] },
    collection: path({ polarization: 'h' }),
  }),
  design(twoLevelEmitter(), [tone()], { laser, collection: path(), drift }),
  design(twoLevelEmitter(), [tone({ fwhm: 9 })], { laser, collection: path({ filter }), drift }),
];

/** Search figures are promised to no more than this by their own estimate. */
const SAME = 1e-6;

function numbersOf(tree: unknown, at = ''): [string, number | null][] {
  if (tree === null || typeof tree === 'number') return [[at, tree]];
  if (typeof tree !== 'object') return [];
  return Object.entries(tree).flatMap(([key, part]) => numbersOf(part, at === '' ? key : `${at}.${key}`));
}

const close = (a: number | null, b: number | null) =>
  a === null || b === null ? a === b : Math.abs(a - b) <= SAME * Math.max(1e-7, Math.abs(b));

const valueAt = (tree: Figures, figure: string) => new Map(numbersOf(tree)).get(figure);

describe('many designs', () => {
  it('give the figures of each by itself, in order', { timeout: 60_000 }, () => {
    const together = evaluateMany(DESIGNS, 'search');
    DESIGNS.forEach((one, i) => {
      const alone = numbersOf(evaluate(one, 'search'));
      const figures = new Map(numbersOf(together[i]));
      expect([...figures.keys()]).toEqual(alone.map(([name]) => name));
      for (const [name, value] of alone) {
        if (/accuracy|p\.3$/.test(name)) continue;
        expect(close(figures.get(name)!, value), `${i} ${name}: ${figures.get(name)} against ${value}`).toBe(
          true,
        );
      }
    });
  });

  it('give null for one that cannot be propagated, and the others all the same', () => {
    // An endless train of dispersion for a very short pulse: no grid can hold it.
    const wild = design(twoLevelEmitter(), [tone({ fwhm: 0.02, gdd: 5e5, tod: 1e6 })]);
    expect(() => evaluate(wild, 'search')).toThrow(PropagationError);
    const [first, failed, last] = evaluateMany([DESIGNS[0], wild, DESIGNS[1]], 'search');
    expect(failed).toBeNull();
    expect(first!.emitted.mean).toBe(evaluate(DESIGNS[0], 'search').emitted.mean);
    expect(last!.signal.mean).toBe(evaluate(DESIGNS[1], 'search').signal.mean);
  });

  it('give null also where a drift makes the failure', () => {
    const wild = design(twoLevelEmitter(), [tone({ fwhm: 0.02, gdd: 5e5, tod: 1e6 })], { drift });
    expect(evaluateMany([wild], 'search')).toEqual([null]);
  });

  it.each([
    [['collected.multiphoton', 'signal.single']],
    [['collected.g2', 'signal.mean', 'pulse.energy_pi_units']],
    [
      [
        'collected.multiphoton',
        'signal.any',
        'pulse.duration_ps',
        'pulse.bandwidth_ghz',
        'collected.leakage',
      ],
    ],
    [['quantile.collected.g2', 'quantile.signal.single', 'emitted.p.2', 'populations.g']],
    [['nominal.signal.single', 'signal.single', 'filtered.multiphoton', 'filtered.mean']],
  ])('give the wanted figures %s of any design', (wanted) => {
    const lean = evaluateMany(DESIGNS, 'search', wanted);
    DESIGNS.forEach((one, i) => {
      const full = evaluate(one, 'search');
      for (const figure of wanted) {
        const value = valueAt(full, figure);
        if (value === undefined) continue;
        const found = valueAt(lean[i]!, figure)!;
        expect(close(found, value), `${i} ${figure}: ${found} against ${value}`).toBe(true);
      }
      expect(lean[i]!.phonons).toEqual(full.phonons);
      expect(lean[i]!.accuracy.error_estimate).toBeLessThan(1e-4);
    });
  });

  it('are judged together at other accuracies too', () => {
    const [figures] = evaluateMany([DESIGNS[0]], 'quoted');
    expect(figures).toEqual(evaluate(DESIGNS[0], 'quoted'));
  });
});
