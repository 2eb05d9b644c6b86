import { describe, expect, it } from 'vitest';
import { collectedDipoles } from '../../../core/emitter/generator.js';
import { type CountResult, countByReference } from '../../../core/kernels/count.js';
import { countWithPhonons } from '../../../core/phonons/count.js';
import { countWithHierarchy } from '../../../core/phonons/hierarchy-count.js';
import { cascadeRequest, phonons } from './support.js';

/** The slow rows run with PULSEWRIGHT_SLOW=1 (npm run test:phonons). */
const slow = process.env['PULSEWRIGHT_SLOW'] === '1';

/** The h-polarised exciton line behind a filter of 30 GHz, centred on the mean line. */
function filtered(order: number) {
  const { scheme, frame } = cascadeRequest();
  const filter = { kappa: 2 * Math.PI * 0.03, center: -frame, order };
  return cascadeRequest({ filter, dipoles: collectedDipoles(scheme, 'exciton', 0) });
}

const transmission = ({ values }: CountResult): number => values['m1'] / values['mean'];

describe('exact method for the cascade behind a filter', () => {
  it('gives the bare figures when the coupling goes to zero', () => {
    const request = filtered(3);
    const bare = countByReference(request).values;
    const weak = countWithHierarchy(request, phonons(4, { coupling: 3e-7 }), { terms: 5, depth: 1 }).values;
    for (const name of ['m1', 'm2', 'm3', 'mean', 'factorial2']) {
      expect(Math.abs(weak[name] / bare[name] - 1), name).toBeLessThan(3e-5);
    }
  });

  // Both treat the line's share alike: it is a property of the bath and the filter, not of the drive.
  it('lets as much through as line and sideband of the polaron frame', () => {
    const exact = countWithHierarchy(filtered(1), phonons(4), { terms: 7, depth: 2 });
    const polaron = countWithPhonons(filtered(1), phonons(4), 'polaron');
    expect(Math.abs(transmission(exact) / transmission(polaron) - 1)).toBeLessThan(2e-3);
  });

  it.runIf(slow)('converges in depth, to the polaron method within its measured class', () => {
    const at = (depth: number) => countWithHierarchy(filtered(2), phonons(4), { terms: 7, depth });
    const [two, three, four] = [at(2), at(3), at(4)];
    const polaron = countWithPhonons(filtered(2), phonons(4), 'polaron');
    const change = (a: CountResult, b: CountResult): number => Math.abs(a.values['m1'] / b.values['m1'] - 1);
    expect(change(three, four)).toBeLessThan(change(two, three) / 3);
    expect(change(three, four)).toBeLessThan(4e-3);
    expect(Math.abs(four.values['m2'] / three.values['m2'] - 1)).toBeLessThan(1e-2);
    expect(Math.abs(transmission(four) / transmission(three) - 1)).toBeLessThan(1e-4);
    expect(Math.abs(transmission(four) / transmission(polaron) - 1)).toBeLessThan(5e-4);
    expect(change(four, polaron)).toBeLessThan(3e-3);
  });
});
