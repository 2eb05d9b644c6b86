import { describe, expect, it } from 'vitest';
import { evaluate, UnsupportedDesign } from '../../../core/evaluate.js';
import { countByReference } from '../../../core/kernels/count.js';
import { correlationFit, frankCondon } from '../../../core/phonons/correlations.js';
import { countWithPhonons } from '../../../core/phonons/count.js';
import { countWithHierarchy } from '../../../core/phonons/hierarchy-count.js';
import { sidebandTransmission } from '../../../core/phonons/sideband.js';
import { design, tone, twoLevelEmitter } from '../../support.js';
import { phonons, ROWS, requestOf, twoLevelRequest } from './support.js';

/** The slow rows run with PULSEWRIGHT_SLOW=1 (npm run test:phonons). */
const slow = process.env['PULSEWRIGHT_SLOW'] === '1';
const PI = Math.PI;
const population = (tones: Parameters<typeof twoLevelRequest>[0], temperature: number): number =>
  countWithPhonons(twoLevelRequest(tones), phonons(temperature), 'polaron').populations[1];

describe('phonon sideband behind a filter', () => {
  /** Filter FWHM (GHz), ⟨B⟩² + T_sb and the share that a hierarchy of a separate code lets through, at 4 K. */
  const rows = [
    [10, 0.9103, 0.9097],
    [30, 0.9131, 0.913],
    [100, 0.9224, 0.9225],
  ] as const;

  for (const [ghz, formula, hierarchy] of rows) {
    it.runIf(slow || ghz === 100)(`${ghz} GHz`, () => {
      const bath = phonons(4);
      const kappa = (2 * PI * ghz) / 1000;
      const total = frankCondon(bath) ** 2 + sidebandTransmission(bath, kappa, 0);
      expect(Math.abs(total - formula)).toBeLessThan(1e-4);
      const request = twoLevelRequest([{ fwhm: 5 }], 500, { filter: { kappa, center: 0, order: 2 } });
      const share = (v: Readonly<Record<string, number>>): number => v['m1'] / v['mean'];
      const bare = share(countByReference(request).values);
      const exact = countWithHierarchy(request, bath, { terms: 7, depth: 3 });
      const polaron = countWithPhonons(request, bath, 'polaron');
      expect(Math.abs(share(exact.values) / bare - hierarchy)).toBeLessThan(1e-3);
      expect(Math.abs(share(exact.values) / bare - total)).toBeLessThan(3e-4);
      expect(Math.abs(share(polaron.values) / bare - total)).toBeLessThan(5e-4);
    });
  }

  it('a filter wider than the sideband passes everything, and one far away only the sideband', () => {
    const bath = phonons(20);
    expect(frankCondon(bath) ** 2 + sidebandTransmission(bath, 1e4, 0)).toBeCloseTo(1, 3);
    // Phonons are emitted more readily than absorbed: more light lies below the line than above it.
    expect(sidebandTransmission(bath, 0.2, -2)).toBeGreaterThan(1.5 * sidebandTransmission(bath, 0.2, 2));
  });

  it('counts light on the line and in the sideband together, pairs across both included', () => {
    const kappa = 50;
    const request = twoLevelRequest([{ fwhm: 20, area: 3 * PI }], 100, {
      filter: { kappa, center: 0, order: 2 },
    });
    const { values } = countWithPhonons(request, phonons(20), 'polaron');
    // Without selection by colour, every order of the count is that of the emitted light.
    expect(values['m1'] / values['mean']).toBeCloseTo(1, 1);
    const pairs = values['m2'] / values['factorial2'];
    expect(pairs / (values['m1'] / values['mean']) ** 2).toBeCloseTo(1, 1);
  });
});

// Common practice, no source beyond those named.
describe('what phonons do to driven dots', () => {
  // Ramsay et al., Phys. Rev. Lett. 104, 017402 (2010).
  it('Rabi oscillations damp with area and with temperature', () => {
    const maximum = (k: number, t: number): number => population([{ fwhm: 10, area: k * PI }], t);
    const cold = [1, 3, 5].map((k) => maximum(k, 4));
    expect(cold[1]).toBeLessThan(cold[0]);
    expect(cold[2]).toBeLessThan(cold[1]);
    expect(maximum(3, 20)).toBeLessThan(cold[1] - 0.1);
  });

  // Lüker et al., Phys. Rev. B 85, 121302(R) (2012).
  it('positive chirp beats negative chirp when cold, and the difference fades when hot', () => {
    const contrast = (t: number): number =>
      population([{ fwhm: 2, area: 4 * PI, gdd: 20 }], t) -
      population([{ fwhm: 2, area: 4 * PI, gdd: -20 }], t);
    expect(contrast(4)).toBeGreaterThan(0.5);
    expect(Math.abs(contrast(77))).toBeLessThan(0.1 * contrast(4));
  });

  // Quilter et al., Phys. Rev. Lett. 114, 137401 (2015).
  it('a laser above the line prepares the exciton by emitting phonons, one below does not', () => {
    const at = (detuning: number): number => population([{ fwhm: 15, area: 6 * PI, detuning }], 4);
    expect(at(1)).toBeGreaterThan(0.2);
    expect(at(-1)).toBeLessThan(0.05);
  });
});

describe('flags and choices', () => {
  it('flags an unphysical probability and does not clamp it', () => {
    const count = countWithPhonons(twoLevelRequest([{ fwhm: 10 }], 500), phonons(77), 'weak-coupling');
    expect(count.values['p1']).toBeLessThan(0);
    expect(count.flags.some((f) => /^p1 = -.* is unphysical: second-order method/.test(f))).toBe(true);
    const fine = countWithPhonons(twoLevelRequest([{ fwhm: 10 }], 500), phonons(4), 'polaron');
    expect(fine.flags).toEqual([]);
  });

  it('refuses what the fits were not made for, and holds the whole range it names', () => {
    const request = twoLevelRequest([{ fwhm: 5 }], 500);
    expect(() => countWithPhonons(request, phonons(301), 'polaron')).toThrow(/301 K.*0 K to 300 K/);
    const hot = design(twoLevelEmitter({ phonons: phonons(301) }), [tone()]);
    expect(() => evaluate(hot, 'search')).toThrow(UnsupportedDesign);
    expect(() => countWithPhonons(request, phonons(4, { cutoff: 0 }), 'polaron')).toThrow(/cutoff 0/);
    for (const temperature of slow ? [0, 0.5, 1, 4, 20, 77, 300] : [0, 1, 300]) {
      const bath = phonons(temperature);
      expect(correlationFit(bath, 'bath', 11).error).toBeLessThan(1e-5);
      const { values } = countWithPhonons(request, bath, 'polaron');
      expect(values['p0'] + values['p1'] + values['multiphoton']).toBeCloseTo(1, 8);
    }
  });

  it('auto takes the polaron frame for a resonant pulse and weak coupling for the two-colour pair, and says so', () => {
    const emitter = twoLevelEmitter({ lifetime: 1e9, phonons: phonons(4, { method: 'auto' }) });
    const resonant = evaluate(design(emitter, [tone()]), 'search');
    expect(resonant.phonons.method).toBe('polaron');
    expect(resonant.notes).toEqual([
      {
        path: 'phonons',
        reason: expect.stringMatching(/^auto: polaron, for a resonant drive .*measured error/),
      },
    ]);
    // What only says how the figures were made is no flag: no goal may refuse a sound design for it.
    expect(resonant.phonons.flags).toEqual([]);
    const pair = evaluate(design(emitter, ROWS[8].tones.map(tone)), 'search');
    expect(pair.phonons.method).toBe('weak-coupling');
    expect(pair.populations['x']).toBeCloseTo(0.978, 2);
  });

  it('states terms, depth and difference of a quoted exact result', () => {
    const emitter = twoLevelEmitter({ phonons: phonons(4), lifetime: 300 });
    const figures = evaluate(design(emitter, [tone({ fwhm: 1 })]), 'quoted');
    expect(figures.notes[0].reason).toMatch(/exact: \d+ terms, depth \d; the last one of either changed/);
    expect(figures.phonons.flags).toEqual([]);
    expect(figures.accuracy.error_estimate).toBeLessThan(1e-3);
    const polaron = countWithPhonons(requestOf(design(emitter, [tone({ fwhm: 1 })])), phonons(4), 'polaron');
    expect(Math.abs(figures.emitted.mean - polaron.values['mean'])).toBeLessThan(3e-3);
  });
});
