import { describe, expect, it } from 'vitest';
import type { Design } from '../../../../core/index.js';
import { countByReference, countPhotons } from '../../../../core/kernels/count.js';
import { levels } from '../../../../core/kernels/fast/levels/kernel.js';
import { cascadeEmitter, design, tone } from '../../../support.js';
import { inPromises, requestOf } from '../fast-designs.js';

/** The two-photon π pulse of the kernel benchmarks: 10 ps, 4.8186π, E_b 2 meV, lifetimes 500 and 250 ps. */
const TWO_PHOTON = design(
  cascadeEmitter({ lifetime: 500, biexcitonLifetime: 250, binding: 2 }),
  [tone({ fwhm: 10, area: 4.8186 * Math.PI })],
  { pulse: { reference: 'two-photon', tones: [tone({ fwhm: 10, area: 4.8186 * Math.PI })] } },
);

const collecting = (d: Design, changes: Partial<Design['collection']>): Design => ({
  ...d,
  collection: { ...d.collection, ...changes },
});

function error(d: Design): number {
  const whole = requestOf(d);
  const request = { ...whole, filter: whole.filter && { ...whole.filter, order: 2 } };
  const found = levels.count(request, countPhotons);
  if (!found) throw new Error('declined');
  const exact = countByReference({ ...request, effort: { ...request.effort, tolerance: 1e-12 } });
  return inPromises(found, {
    ...exact,
    values: Object.fromEntries(Object.keys(found.values).map((k) => [k, exact.values[k]])),
  });
}

describe('counting with more than two levels', () => {
  // Source: two independent methods that agree to ten digits.
  it('gives the figures of the two-photon π pulse', () => {
    const found = levels.count({ ...requestOf(TWO_PHOTON), shift: 0, thinning: null }, countPhotons);
    const v = found?.values ?? {};
    expect(v['mean']).toBeCloseTo(1.00005965891, 9);
    expect(v['p0']).toBeCloseTo(8.44857258526e-4, 9);
    expect(v['p1']).toBeCloseTo(0.99825135876, 9);
    expect(v['p2']).toBeCloseTo(9.030522597e-4, 9);
    expect(v['factorial2'] / v['mean'] ** 2 / 1.81028162019e-3).toBeCloseTo(1, 6);
  });

  // Source of all below: the adaptive Runge–Kutta propagator.
  it.each([
    ['h', null],
    ['v', null],
    ['h', { fwhm: 20, center: 0 }],
    ['v', { fwhm: 80, center: -4 }],
  ] as const)('agrees with the reference, collecting %s behind %o', (polarization, filter) => {
    expect(error(collecting(TWO_PHOTON, { polarization, filter }))).toBeLessThan(1);
  });

  it('keeps split lines that are collected together apart', () => {
    const split = { ...TWO_PHOTON, emitter: { ...TWO_PHOTON.emitter, splitting: 0.06 } };
    expect(error(collecting(split, { polarization: 'all' }))).toBeLessThan(1);
    expect(error(collecting(split, { polarization: 'all', filter: { fwhm: 150, center: 3 } }))).toBeLessThan(
      1,
    );
  });

  it('leaves figures out that nobody wants, without touching the others', () => {
    const request = requestOf(TWO_PHOTON);
    const all = levels.count(request, countPhotons);
    const some = levels.count({ ...request, wanted: ['multiphoton', 'mean'] }, countPhotons);
    expect(Object.keys(some?.values ?? {}).sort()).toEqual(['mean', 'multiphoton']);
    for (const name of ['multiphoton', 'mean']) {
      expect(some?.values[name]).toBeCloseTo(all?.values[name] ?? Number.NaN, 8);
    }
    expect(some?.populations[3]).toBeCloseTo(all?.populations[3] ?? Number.NaN, 8);
  });
});
