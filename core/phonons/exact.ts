import type { CountRequest } from '../kernels/count.js';
import type { Bath } from './bath.js';
import type { PhononCount, PhononMethod } from './contract.js';
import { correlationFit, frankCondon } from './correlations.js';
import { countWithHierarchy, type TowerCount, type TowerSize } from './hierarchy-count.js';

/** Largest relative difference of any figure between a size and the next larger one, when quoted. */
export const SETTLED = 1e-3;
/** Fit error up to which a usual size takes exponentials. */
const USUAL_FIT = 3e-4;
const FEWEST_TERMS = 5;
const MOST_TERMS = 11;
const MOST_DEPTH = 8;
/** Auxiliary operators times real coordinates beyond which a larger hierarchy is not tried. */
const LARGEST_TOWER = 60_000;
/** Figures smaller than this are compared absolutely. */
const FLOOR = 1e-6;

/**
 * Hierarchical equations of motion (Tanimura & Kubo, J. Phys. Soc. Jpn. 58, 101 (1989)): non-perturbative in the coupling,
 * exact for the fitted bath when depth and terms suffice. Zero-phonon line and sideband come out by themselves.
 */
export const exact: PhononMethod = {
  name: 'exact',
  summary: 'hierarchical equations of motion; for every number that is quoted',
  secondOrder: false,
  count(request, bath, quoted) {
    const usual = usualSize(request, bath);
    return quoted ? settle(request, bath, usual) : unsettled(request, bath, usual);
  },
};

/**
 * Depth 3 for at most one exciton, 4 for a biexciton (whose coupling is twice as strong), more for a warm bath, which holds
 * about φ(0) phonons per exciton; and as many terms as fit the bath.
 */
export function usualSize(request: CountRequest, bath: Bath): TowerSize {
  const excitons = Math.max(...request.scheme.levels.map((l) => l.excitons));
  const warm = Math.max(0, Math.ceil(-4 * Math.log(frankCondon(bath)) - 0.3));
  return { terms: usualTerms(bath), depth: Math.min(2 + excitons + warm, MOST_DEPTH) };
}

/** As many exponentials as fit the bath to what a hierarchy of usual depth is worth. */
export function usualTerms(bath: Bath): number {
  let terms = FEWEST_TERMS;
  while (terms < MOST_TERMS && correlationFit(bath, 'bath', terms).error > USUAL_FIT) terms += 1;
  return terms;
}

function unsettled(request: CountRequest, bath: Bath, size: TowerSize): PhononCount {
  const run = countWithHierarchy(request, bath, size);
  return {
    ...run,
    flags: [],
    remarks: [`exact: ${size.terms} terms, depth ${size.depth}, one size only; ${fitPhrase(run)}`],
    error: run.fitError,
  };
}

/** Raises depth and terms in turn until neither changes any figure by more than `SETTLED`. */
function settle(request: CountRequest, bath: Bath, from: TowerSize): PhononCount {
  let size = from;
  let run = countWithHierarchy(request, bath, size);
  for (;;) {
    const larger = largerSizes(request, size);
    const trials = larger.map((next) => ({ next, run: countWithHierarchy(request, bath, next) }));
    const changes = trials.map((trial) => difference(run, trial.run));
    const worst = Math.max(...changes, run.fitError);
    if (worst <= SETTLED || larger.length < 2) {
      const best = trials[changes.indexOf(Math.max(...changes))]?.run ?? run;
      const settled = worst <= SETTLED;
      const phrase = `exact: ${size.terms} terms, depth ${size.depth}; one more of either changes a figure by at most ${worst.toExponential(1)}; ${fitPhrase(run)}`;
      const flags = settled
        ? []
        : [
            `exact: not settled to ${SETTLED}: larger hierarchies than ${run.operators} operators were not tried`,
          ];
      return { ...best, flags, remarks: [phrase], error: worst };
    }
    const at = changes.indexOf(Math.max(...changes));
    size = trials[at].next;
    run = trials[at].run;
  }
}

function largerSizes(request: CountRequest, size: TowerSize): TowerSize[] {
  const fits = (s: TowerSize): boolean =>
    s.terms <= MOST_TERMS &&
    s.depth <= MOST_DEPTH &&
    binomial(s.terms + s.depth, s.depth) * request.scheme.levels.length ** 2 <= LARGEST_TOWER;
  return [
    { ...size, depth: size.depth + 1 },
    { ...size, terms: size.terms + 1 },
  ].filter(fits);
}

function binomial(n: number, k: number): number {
  let out = 1;
  for (let i = 1; i <= k; i++) out = (out * (n - k + i)) / i;
  return out;
}

/** Largest relative difference over all figures that are not negligible. */
function difference(a: TowerCount, b: TowerCount): number {
  let worst = 0;
  for (const [name, x] of Object.entries(a.values)) {
    const y = b.values[name];
    // p_0 and p_3 of a good pulse are small remainders of others: judged by what they mean for those.
    const scale = /^(p0|p3|thinned0)$/.test(name) ? 1e-1 : FLOOR;
    worst = Math.max(worst, Math.abs(x - y) / Math.max(Math.abs(y), scale));
  }
  return worst;
}

function fitPhrase(run: TowerCount): string {
  return `${run.operators} auxiliary operators, bath fitted to ${run.fitError.toExponential(1)}`;
}
