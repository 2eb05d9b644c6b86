import type { CountRequest, CountResult } from '../../count.js';
import type { FastKernel } from '../contract.js';
import { smoothSpans } from '../spans.js';
import { coherentRate, phaseIsSteady } from '../step-rule.js';
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
  const { breakpoints, scales } = drive;
  return {
    request,
    model,
    filter: { kappa: filter.kappa, offset: filter.center - model.energy },
    center: filter.center,
    order: filter.order,
    start: breakpoints[0],
    end: breakpoints[breakpoints.length - 1],
    follow: scales.frequency > 0 && breakpoints.length === 2 && phaseIsSteady(drive, spans),
  };
}

/** Steps per ps over what the coherent motion would need, and per damping of a leg. */
const COHERENT = 0.75;
const DAMPED = 0.5;

function firstSteps({ request, model, filter, start, end, follow }: FilteredProblem): number {
  const { scales } = request.drive;
  const rabi = scales.peakRabi * Math.abs(model.weight);
  const rate = coherentRate(request.drive, rabi, model.energy, follow || scales.frequency === 0);
  return Math.max(8, Math.ceil((end - start) * Math.max(COHERENT * rate, DAMPED * filter.kappa)));
}
