import { readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import { countWithHierarchy } from '../../../core/phonons/hierarchy-count.js';
import { phonons, twoLevelRequest } from './support.js';

interface Golden {
  readonly cases: readonly {
    readonly name: string;
    readonly area: number;
    readonly fwhm: number;
    readonly gdd: number;
    readonly detuning: number;
    readonly temperature: number;
    readonly population: number;
    /** Estimate of what step and memory of the path integral leave. */
    readonly error: number;
  }[];
}

const golden = JSON.parse(
  readFileSync(new URL('../../golden/phonons-path-integral.json', import.meta.url), 'utf8'),
) as Golden;

describe('against a path integral (augmented density tensor, Makri & Makarov, J. Chem. Phys. 102, 4600 (1995))', () => {
  it.each(golden.cases)('$name', ({ area, fwhm, gdd, detuning, temperature, population, error }) => {
    expect(error).toBeLessThan(1e-3);
    const request = twoLevelRequest([{ area, fwhm, gdd, detuning }]);
    const size = { terms: 8, depth: temperature > 10 ? 4 : 3 };
    const { populations } = countWithHierarchy(request, phonons(temperature), size);
    expect(Math.abs(populations[1] - population)).toBeLessThan(error + 3e-4);
  });
});
