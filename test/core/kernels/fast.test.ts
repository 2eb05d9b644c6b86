import { describe, expect, it } from 'vitest';
import type { Design } from '../../../core/index.js';
import { countByReference, countPhotons } from '../../../core/kernels/count.js';
import { fastKernels } from '../../../core/kernels/fast/registry.js';
import { asTwoLevel } from '../../../core/kernels/fast/two-level.js';
import { cascadeEmitter, design, tone, twoLevelEmitter } from '../../support.js';
import { agreement, inPromises, randomDesign, requestOf } from './fast-designs.js';

/*
 * Source: the independent adaptive Runge–Kutta propagator, itself held to closed forms and to an ODE code elsewhere.
 * The long form of these comparisons is `npm run test:kernels`.
 */
describe('fast kernels against the reference propagator', () => {
  const kinds = [
    { model: 'two-level', filtered: false, count: 40, fast: 15 },
    { model: 'two-level', filtered: true, count: 10, fast: 4 },
    { model: 'cascade', filtered: false, count: 12, fast: 2 },
    { model: 'cascade', filtered: true, count: 4, fast: 0 },
  ] as const;

  for (const { model, filtered, count, fast } of kinds) {
    it(`${model}, ${filtered ? 'filtered' : 'emitted'}: ${count} random designs of moderate size agree or are declined`, () => {
      const outcome = agreement(model, filtered, count, 20260, { most: 4000 });
      expect(outcome.wrong).toEqual([]);
      expect(outcome.fast).toBeGreaterThanOrEqual(fast);
    }, 120_000);
  }
});

const crossed = (filter: Design['collection']['filter']): Design['collection'] => ({
  line: 'exciton',
  polarization: 'crossed',
  efficiency: 1,
  filter,
});

describe('fast kernels', () => {
  it('count thinned light, a part of the decays and gaps between pulses', () => {
    const far = design(twoLevelEmitter({ dephasing: 0.004 }), [
      tone({ fwhm: 4 }),
      tone({ fwhm: 7, area: 2, detuning: 0.4, delay: 160, phase: 1 }),
    ]);
    const whole = requestOf(far);
    const dipole = whole.dipoles[0];
    const part = { ...dipole, re: dipole.re.map((v) => 0.8 * v) };
    for (const request of [whole, { ...whole, dipoles: [part] }]) {
      const kernel = fastKernels.find((k) => k.supports(request));
      const found = kernel?.count(request, countPhotons);
      expect(found).toBeTruthy();
      if (found)
        expect(
          inPromises(
            found,
            countByReference({ ...request, effort: { ...request.effort, tolerance: 1e-12 } }),
          ),
        ).toBeLessThan(1);
    }
  });

  it('keep the coherence between h and v behind an oblique analyser, emitted and filtered', () => {
    const emitter = cascadeEmitter({ splitting: 0.02, binding: 3 });
    for (const filter of [null, { fwhm: 25, center: 2 }]) {
      const d = design(emitter, [tone({ fwhm: 6, polarization: 0.6 })], { collection: crossed(filter) });
      const request = requestOf(d);
      const found = fastKernels.find((k) => k.supports(request))?.count(request, countPhotons);
      expect(found).toBeTruthy();
      if (found)
        expect(
          inPromises(
            found,
            countByReference({ ...request, effort: { ...request.effort, tolerance: 1e-12 } }),
          ),
        ).toBeLessThan(1);
    }
  });

  it('refine where more parts are asked for', () => {
    for (const filter of [null, { fwhm: 40, center: 0 }]) {
      const d = design(twoLevelEmitter(), [tone({ fwhm: 12, area: 9 })], {
        collection: { ...crossed(filter), polarization: 'all' },
      });
      const truth = countByReference({
        ...requestOf(d),
        effort: { ...requestOf(d).effort, tolerance: 1e-12, parts: 2 },
      });
      const once = countPhotons(requestOf(d));
      const twice = countPhotons(requestOf(d, 1e-10, 2));
      expect(twice.steps).toBeGreaterThan(1.8 * once.steps);
      expect(inPromises(once, truth)).toBeLessThan(1);
      expect(inPromises(twice, truth)).toBeLessThan(0.1);
    }
  });

  it('decline a drive with edges and one beyond their steps', () => {
    const square = requestOf(design(twoLevelEmitter(), [tone({ shape: 'square' })]));
    for (const kernel of fastKernels)
      expect(kernel.supports(square) ? kernel.count(square, countPhotons) : null).toBeNull();
    const endless = requestOf(design(twoLevelEmitter(), [tone({ fwhm: 5000, area: 1e6 })]));
    for (const kernel of fastKernels)
      expect(kernel.supports(endless) ? kernel.count(endless, countPhotons) : null).toBeNull();
  });

  it('give the same bits whatever was counted before', () => {
    const filtered = randomDesign(7, 3, 'two-level', true);
    const request = { ...requestOf(filtered), drive: requestOf(design(twoLevelEmitter(), [tone()])).drive };
    const first = countPhotons(request);
    for (let k = 0; k < 12; k++) {
      countPhotons(
        requestOf(
          design(twoLevelEmitter({ lifetime: 300 + k }), [tone({ fwhm: 4 + k })], {
            collection: { ...crossed({ fwhm: 20 + k, center: 0 }), polarization: 'all' },
          }),
        ),
      );
    }
    expect(countPhotons(request)).toEqual(first);
  });

  // A weak chirped tone beside a strong one: following the common phase fooled two runs into agreeing (2e-9 off).
  it('do not follow the phase of tones that beat', () => {
    const request = requestOf(randomDesign(5, 37, 'two-level', false));
    const truth = countByReference({ ...request, effort: { ...request.effort, tolerance: 1e-12 } });
    expect(inPromises(countPhotons(request), truth)).toBeLessThan(1);
  });

  it('are chosen by traits: the two-level kernel takes any scheme of two levels and one decay', () => {
    expect(asTwoLevel(requestOf(design(twoLevelEmitter(), [tone()])))).not.toBeNull();
    expect(asTwoLevel(requestOf(design(cascadeEmitter(), [tone()])))).toBeNull();
  });
});
