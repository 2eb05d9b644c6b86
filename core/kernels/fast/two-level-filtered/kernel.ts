import type { CountRequest, CountResult } from '../../count.js';
import { prepare } from '../bloch/problem.js';
import { firstCounts } from '../bloch/steps.js';
import type { FastKernel } from '../contract.js';
import { smoothSpans } from '../spans.js';
import { asTwoLevel } from '../two-level.js';
import { converge, named } from './converge.js';
import { type FilteredProblem, run } from './run.js';

/**
 * Two levels behind a Lorentzian filter: the moments of the transmitted light by pairs of events (legs.ts), on uniform
 * steps with exact rotations by the drive (step.ts). Figures of the light before the filter are counted apart.
 */
export const twoLevelFiltered: FastKernel = {
  name: 'two-level filtered',
  supports: (request) =>
    request.filter !== null && request.filter.order <= MOST_MOMENTS && asTwoLevel(request) !== null,
  count(request, countPart) {
    const problem = problemOf(request);
    if (!problem) return null;
    const { tolerance, parts } = request.effort;
    const found = converge(firstSteps(problem), tolerance * ACCEPT, MOST_STEPS, (steps) =>
      run(problem, steps),
    );
    if (!found) return null;
    const moments =
      parts === 1
        ? found
        : converge(found.last * parts, tolerance * ACCEPT, MOST_STEPS, (n) => run(problem, n));
    if (!moments) return null;
    return together(request, named(moments.result), { ...moments, error: found.error }, countPart);
  },
};

const MOST_MOMENTS = 6;
const MOST_STEPS = 100_000;
/** Accepted error in units of the effort's tolerance per step. */
const ACCEPT = 10;
/** Figures of the light behind the filter; all others are those before it. */
const BEHIND = /^m\d+$/;

/** Light before the filter does not see it: it is a cheaper problem with its own steps. */
function together(
  request: CountRequest,
  values: Readonly<Record<string, number>>,
  { result, steps, error }: { result: { populations: readonly number[] }; steps: number; error: number },
  countPart: (request: CountRequest) => CountResult,
): CountResult {
  const { wanted } = request;
  if (wanted?.every((name) => BEHIND.test(name))) {
    return { values, populations: result.populations, steps, localErrors: error };
  }
  const before = countPart({ ...request, filter: null });
  return {
    values: { ...before.values, ...values },
    populations: before.populations,
    steps: steps + before.steps,
    localErrors: Math.max(error, before.localErrors),
  };
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

/** Steps over what the light before the filter needs, and per damping of a leg. */
const COHERENT = 0.9;
const DAMPED = 0.5;

function firstSteps({ drive, model, part, filter }: FilteredProblem): number {
  const [count] = firstCounts({ drive, model, spans: [part], thinning: null, wants: NOTHING });
  const { start, end } = part.span;
  return Math.max(Math.ceil(COHERENT * count), Math.ceil((end - start) * DAMPED * filter.kappa));
}

const NOTHING = { counted: false, ladder: false, thinned: false };
