import { describe, expect, it } from 'vitest';
import { collectedDipoles } from '../../../core/emitter/generator.js';
import type { Design } from '../../../core/index.js';
import { countByReference } from '../../../core/kernels/count.js';
import { situation } from '../../../core/situation.js';
import { RAD_PER_PS_PER_GHZ } from '../../../core/units/constants.js';
import { tone, twoLevelEmitter } from '../../support.js';

/** Chirped two-photon pulses whose steps the density operator, at rest before the pulse, once set too long. */
const CASES = [
  { fwhm: 3.967, gdd: -154.8, area: 12.547, binding: 5.955, detuning: 1.98, ghz: 4.053 },
  { fwhm: 4.392, gdd: 113.1, area: 19.321, binding: 5.042, detuning: 4.12, ghz: 207.3 },
];

function moments({ ghz, binding, ...pulse }: (typeof CASES)[number], parts: number): number[] {
  const design: Design = {
    emitter: {
      ...twoLevelEmitter(),
      model: 'cascade',
      lifetime: 400,
      biexcitonLifetime: 200,
      binding,
      splitting: 0.02,
    },
    pulse: { reference: 'two-photon', tones: [tone(pulse)] },
    collection: {
      line: 'exciton',
      polarization: 'h',
      efficiency: 1,
      filter: { fwhm: ghz, center: 0 },
    },
    laser: null,
    drift: null,
  };
  const { scheme, drive, frame, line } = situation(design);
  const { values } = countByReference({
    scheme,
    dipoles: collectedDipoles(scheme, 'exciton', 0),
    drive,
    frame,
    shift: 0,
    thinning: null,
    filter: { kappa: ghz * RAD_PER_PS_PER_GHZ, center: line - frame, order: 3 },
    effort: { tolerance: 1e-10, parts, nodes: 1, series: 'estimate' },
  });
  return ['m1', 'm2', 'm3'].map((name) => values[name]);
}

describe('the reference propagator behind a filter', () => {
  it.each(CASES)('is stable and agrees with three times the steps: %o', (design) => {
    const once = moments(design, 1);
    const fine = moments(design, 3);
    for (let k = 0; k < 3; k++) expect(Math.abs(once[k] - fine[k])).toBeLessThan(1e-6 * fine[k] + 1e-12);
  });
});
