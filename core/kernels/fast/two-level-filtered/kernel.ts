import type { CountRequest, CountResult, Effort } from '../../count.js';
import { prepare } from '../bloch/problem.js';
import { firstCounts } from '../bloch/steps.js';
import type { FastKernel } from '../contract.js';
import { smoothSpans } from '../spans.js';
import { asTwoLevel } from '../two-level.js';
import { type Converged, converge, named } from './converge.js';
import { differentiate, keepingRun } from './gradient.js';
import { reversibleMachine } from './machine.js';
import { type FilteredProblem, run } from './run.js';

/**
 * Two levels behind a Lorentzian filter: the moments of the transmitted light by pairs of events (legs.ts), on uniform
 * steps with exact rotations by the drive (step.ts). Figures of the light before the filter are counted apart; derivatives
 * are given of the moments, by the finest of the runs that were extrapolated.
 */
export const twoLevelFiltered: FastKernel = {
  name: 'two-level filtered',
  supports: (request) =>
    request.filter !== null && request.filter.order <= MOST_MOMENTS && asTwoLevel(request) !== null,
  count(request, countPart) {
    const problem = problemOf(request);
    const found = problem && settle(problem, request.effort);
    if (!found) return null;
    return onlyBehind(request) ? behind(found) : together(found, countPart({ ...request, filter: null }));
  },
  countWithGradient(request, seeds) {
    const problem = onlyBehind(request) ? problemOf(request) : null;
    const machine = problem && reversibleMachine(problem.order);
    if (!machine) return null;
    const kept: Float64Array[] = [];
    const found = settle(problem, request.effort, (steps) => keepingRun(problem, steps, machine, kept));
    if (!found) return null;
    const result = behind(found);
    const weights = seeds(result.values).map((seed) => momentWeights(seed, problem.order));
    const known = weights.filter((w) => w !== null);
    if (known.length < weights.length) return null;
    const gradient = differentiate(problem, machine, found.last, kept, known);
    return gradient && { result, ...gradient };
  },
};

const MOST_MOMENTS = 6;
const MOST_STEPS = 100_000;
/** Accepted error in units of the effort's tolerance per step. */
const ACCEPT = 10;
/** Figures of the light behind the filter; all others are those before it. */
const BEHIND = /^m\d+$/;

const onlyBehind = ({ wanted }: CountRequest): boolean => wanted?.every((name) => BEHIND.test(name)) ?? false;

function settle(
  problem: FilteredProblem,
  { tolerance, parts }: Effort,
  runOn = (steps: number) => run(problem, steps),
): Converged | null {
  const from = (first: number) => converge(first, tolerance * ACCEPT, MOST_STEPS, runOn);
  const found = from(firstSteps(problem));
  if (!found || parts === 1) return found;
  const finer = from(found.last * parts);
  return finer && { ...finer, error: found.error };
}

const behind = ({ result, steps, error }: Converged): CountResult => ({
  values: named(result),
  populations: result.populations,
  steps,
  localErrors: error,
});

/** Light before the filter does not see it: it is a cheaper problem with its own steps. */
const together = (found: Converged, before: CountResult): CountResult => ({
  values: { ...before.values, ...named(found.result) },
  populations: before.populations,
  steps: found.steps + before.steps,
  localErrors: Math.max(found.error, before.localErrors),
});

/** Weights of m_1 … m_K, or null where a scalar depends on another figure. */
function momentWeights(seed: Readonly<Record<string, number>>, order: number): number[] | null {
  const weights = new Array<number>(order).fill(0);
  for (const [name, weight] of Object.entries(seed)) {
    if (weight === 0) continue;
    const k = BEHIND.test(name) ? Number(name.slice(1)) : 0;
    if (k < 1 || k > order) return null;
    weights[k - 1] = weight;
  }
  return weights;
}

/** The request as this kernel sees it, or null when the drive has edges. */
export function problemOf(request: CountRequest): FilteredProblem | null {
  const { drive, filter } = request;
  const model = asTwoLevel(request);
  const spans = smoothSpans(drive);
  if (!model || !spans || !filter) return null;
  const { breakpoints } = drive;
  const last = breakpoints.length - 1;
  // Gaps are stepped through: legs go on, and one grid serves all.
  const window = { start: breakpoints[0], end: breakpoints[last], first: 0, last: last - 1, gap: false };
  const [part] = prepare({ ...request, filter: null }, model, [window]).spans;
  return {
    drive,
    model,
    part,
    filter: { kappa: filter.kappa, offset: filter.center - model.energy },
    center: filter.center,
    order: filter.order,
  };
}

/** First guess, over what the light before the filter needs, and for the damping of a leg over the window. */
const COHERENT = 1.2;
const DAMPED = 0.6;

function firstSteps({ drive, model, part, filter }: FilteredProblem): number {
  const [count] = firstCounts({ drive, model, spans: [part], thinning: null, wants: NOTHING });
  const { start, end } = part.span;
  return Math.ceil(COHERENT * count + DAMPED * filter.kappa * (end - start));
}

const NOTHING = { counted: false, ladder: false, thinned: false };
