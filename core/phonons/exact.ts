import type { CountRequest } from '../kernels/count.js';
import type { Bath } from './bath.js';
import type { PhononCount, PhononMethod, SettledSize } from './contract.js';
import { correlationFit, frankCondon } from './correlations.js';
import { countWithHierarchy, type TowerCount, type TowerSize } from './hierarchy-count.js';

/** Largest relative difference of any figure between a size and the next smaller ones, when quoted. */
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
    const { tower } = request.effort;
    if (tower) return atSize(request, bath, tower);
    const usual = usualSize(request, bath);
    // A check of other figures must not share their size.
    if (request.effort.kernel === 'reference') return settle(request, bath, larger(usual));
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

const larger = ({ terms, depth }: TowerSize): TowerSize => ({
  terms: Math.min(terms + 1, MOST_TERMS),
  depth: Math.min(depth + 1, MOST_DEPTH),
});

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

/** At a size that was found enough for the same design without drift. */
function atSize(request: CountRequest, bath: Bath, { error, ...size }: SettledSize): PhononCount {
  const run = countWithHierarchy(request, bath, size);
  return { ...run, flags: [], remarks: [], error: Math.max(error, run.fitError) };
}

/**
 * Raises depth and terms until the last step of either changed no figure by more than `SETTLED`: depths d − 1 and d agree,
 * and K − 1 and K terms. What is quoted is the larger size, whose own error is smaller still.
 */
function settle(request: CountRequest, bath: Bath, from: TowerSize): PhononCount {
  let size = from;
  let run = countWithHierarchy(request, bath, size);
  const change = (smaller: TowerSize): number => difference(countWithHierarchy(request, bath, smaller), run);
  let byDepth = change({ ...size, depth: size.depth - 1 });
  let byTerms = change({ ...size, terms: size.terms - 1 });
  for (;;) {
    const error = Math.max(byDepth, byTerms, run.fitError);
    const grown = nextSize(size, byDepth, Math.max(byTerms, run.fitError));
    const fits =
      grown.depth <= MOST_DEPTH && grown.terms <= MOST_TERMS && coordinates(request, grown) <= LARGEST_TOWER;
    if (error <= SETTLED || !fits) return { ...run, ...report(size, run, error), error };
    const before = run;
    run = countWithHierarchy(request, bath, grown);
    if (grown.depth > size.depth) byDepth = difference(before, run);
    else byTerms = difference(before, run);
    size = grown;
  }
}

/** One more of what changed the figures most. */
function nextSize(size: TowerSize, byDepth: number, byTerms: number): TowerSize {
  return byDepth > byTerms ? { ...size, depth: size.depth + 1 } : { ...size, terms: size.terms + 1 };
}

const coordinates = (request: CountRequest, { terms, depth }: TowerSize): number =>
  binomial(terms + depth, depth) * request.scheme.levels.length ** 2;

function report(
  size: TowerSize,
  run: TowerCount,
  error: number,
): Pick<PhononCount, 'flags' | 'remarks' | 'tower'> {
  const flags =
    error <= SETTLED
      ? []
      : [
          `exact: not settled to ${SETTLED}: larger hierarchies than ${run.operators} operators were not tried`,
        ];
  const phrase = `exact: ${size.terms} terms, depth ${size.depth}; the last one of either changed a figure by at most ${error.toExponential(1)}; ${fitPhrase(run)}`;
  return { flags, remarks: [phrase], tower: { ...size, error } };
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
    worst = Math.max(worst, Math.abs(x - y) / scaleOf(name, y));
  }
  return worst;
}

/** p_0 is what is missing to P(n≥1), p_3 a small part of P(n≥2): each is judged by what it means for those. */
function scaleOf(name: string, value: number): number {
  if (/^(p0|thinned0)$/.test(name)) return Math.max(value, 1 - value);
  return Math.max(Math.abs(value), name === 'p3' ? 1e-1 : FLOOR);
}

function fitPhrase(run: TowerCount): string {
  return `${run.operators} auxiliary operators, bath fitted to ${run.fitError.toExponential(1)}`;
}
