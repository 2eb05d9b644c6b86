import { describe, expect, it } from 'vitest';
import { countWithPhonons } from '../../../core/phonons/count.js';
import { countWithHierarchy } from '../../../core/phonons/hierarchy-count.js';
import { CASCADE_EXPECTED, cascadeRequest, phonons, ROWS, type Row, twoLevelRequest } from './support.js';

/** The slow rows run with PULSEWRIGHT_SLOW=1 (npm run test:phonons). */
const slow = process.env['PULSEWRIGHT_SLOW'] === '1';
const quick = (row: Row): boolean => /^π, (2|5) ps|^5π/.test(row.name);

describe('excited-state population after the pulse', () => {
  for (const row of ROWS) {
    it(`${row.name}: second-order methods within 1e-4`, () => {
      const request = twoLevelRequest(row.tones);
      const bath = phonons(row.temperature);
      const weak = countWithPhonons(request, bath, 'weak-coupling');
      const polaron = countWithPhonons(request, bath, 'polaron');
      expect(Math.abs(weak.populations[1] - row.expected[0])).toBeLessThan(1e-4);
      expect(Math.abs(polaron.populations[1] - row.expected[1])).toBeLessThan(1e-4);
      expect(weak.populations[0] + weak.populations[1]).toBeCloseTo(1, 9);
    });

    it.runIf(slow || quick(row))(`${row.name}: hierarchy within 3e-4`, () => {
      const request = twoLevelRequest(row.tones);
      const { populations } = countWithHierarchy(request, phonons(row.temperature), { terms: 8, depth: 3 });
      expect(Math.abs(populations[1] - row.expected[2])).toBeLessThan(3e-4);
    });
  }
});

describe('exciton line of the cascade under two-photon excitation', () => {
  it('second-order methods within 1e-4', () => {
    const request = cascadeRequest();
    const weak = countWithPhonons(request, phonons(4), 'weak-coupling');
    const polaron = countWithPhonons(request, phonons(4), 'polaron');
    expect(Math.abs(weak.values['mean'] - CASCADE_EXPECTED[0])).toBeLessThan(1e-4);
    expect(Math.abs(polaron.values['mean'] - CASCADE_EXPECTED[1])).toBeLessThan(1e-4);
  });

  it.runIf(slow)('hierarchy of depth 4 within 1e-3', () => {
    const { values } = countWithHierarchy(cascadeRequest(), phonons(4), { terms: 7, depth: 4 });
    expect(Math.abs(values['mean'] - CASCADE_EXPECTED[2])).toBeLessThan(1e-3);
  });
});

describe('convergence of the hierarchy', () => {
  it.runIf(slow)('more terms and more depth change the 5π population by less each time', () => {
    const request = twoLevelRequest(ROWS[4].tones);
    const at = (terms: number, depth: number): number =>
      countWithHierarchy(request, phonons(4), { terms, depth }).populations[1];
    const best = at(10, 4);
    const errors = [at(5, 3), at(7, 3), at(10, 3)].map((x) => Math.abs(x - best));
    expect(errors[1]).toBeLessThan(errors[0]);
    expect(errors[2]).toBeLessThan(1e-4);
    const shallow = [at(7, 1), at(7, 2), at(7, 3)].map((x) => Math.abs(x - best));
    expect(shallow[1]).toBeLessThan(shallow[0] / 3);
    expect(shallow[2]).toBeLessThan(shallow[1]);
  });
});
