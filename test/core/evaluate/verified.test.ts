import { describe, expect, it } from 'vitest';
import { evaluate, figureDifference, relativeDifference } from '../../../core/index.js';
import { design, tone, twoLevelEmitter } from '../../support.js';

describe('accuracy verified', () => {
  it('agrees with quoted without sharing its kernels, and does no less', () => {
    const chirped = design(twoLevelEmitter({ lifetime: 200 }), [tone({ area: 5, gdd: 6 })]);
    const [quoted, verified] = [evaluate(chirped, 'quoted'), evaluate(chirped, 'verified')];
    expect(figureDifference(quoted, verified)).toBeLessThan(1e-6);
    expect(verified.accuracy.error_estimate).toBeLessThan(1e-6);
    expect(verified.accuracy.steps).not.toBe(quoted.accuracy.steps);
  });

  it('takes the exact phonon method whatever the design names', () => {
    const phonons = { coupling: 0.03, cutoff: 2.2, temperature: 4, method: 'polaron' as const };
    const short = design(twoLevelEmitter({ lifetime: 300, phonons }), [tone({ fwhm: 1 })]);
    const exact = design(twoLevelEmitter({ lifetime: 300, phonons: { ...phonons, method: 'exact' } }), [
      tone({ fwhm: 1 }),
    ]);
    const verified = evaluate(short, 'verified');
    expect(verified.phonons.method).toBe('exact');
    const quoted = evaluate(exact, 'quoted');
    // By a larger hierarchy and other steps.
    expect(verified.emitted.mean).not.toBe(quoted.emitted.mean);
    expect(relativeDifference(quoted, verified)).toBeLessThan(1e-4);
  });
});
