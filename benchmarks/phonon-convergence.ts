/**
 * Convergence of the exact phonon method in depth and in exponentials of the bath: figures of each size against the
 * largest one tried. Part of `npm run bench:phonons`.
 */
import { countWithHierarchy } from '../core/phonons/hierarchy-count.js';
import { phonons, twoLevelRequest } from '../test/core/phonons/support.js';

const TERMS = [4, 5, 6, 7, 8];
const DEPTHS = [1, 2, 3, 4];
const REFERENCE = { terms: 8, depth: 5 };
const bath = phonons(4);

function table(title: string, request: ReturnType<typeof twoLevelRequest>): void {
  const at = (size: typeof REFERENCE) => {
    const { populations, values, fitError } = countWithHierarchy(request, bath, size);
    return { x: populations[1], multiphoton: values['multiphoton'], fitError };
  };
  const best = at(REFERENCE);
  console.log(`\n${title}: x = ${best.x.toFixed(6)}, P(n≥2) = ${best.multiphoton.toExponential(4)}`);
  console.log('difference from 8 terms, depth 5: of x (absolute) / of P(n≥2) (relative)');
  console.log('| terms | fit error | depth 1 | depth 2 | depth 3 | depth 4 |');
  console.log('| --- | --- | --- | --- | --- | --- |');
  for (const terms of TERMS) {
    const runs = DEPTHS.map((depth) => at({ terms, depth }));
    const cells = runs.map(({ x, multiphoton }) =>
      [Math.abs(x - best.x), Math.abs(multiphoton / best.multiphoton - 1)]
        .map((difference) => difference.toExponential(0))
        .join(' / '),
    );
    console.log(`| ${terms} | ${runs[0].fitError.toExponential(0)} | ${cells.join(' | ')} |`);
  }
}

table('two-level, π, 5 ps', twoLevelRequest([{ fwhm: 5 }], 500));
table('two-level, 5π, 10 ps', twoLevelRequest([{ fwhm: 10, area: 5 * Math.PI }], 500));
table('two-level, 4π, 2 ps, GDD +8 ps²', twoLevelRequest([{ fwhm: 2, area: 4 * Math.PI, gdd: 8 }], 500));
