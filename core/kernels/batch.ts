import {
  type CountRequest,
  type CountResult,
  countByReference,
  countPhotons,
  PropagationError,
} from './count.js';
import type { FastKernel } from './fast/contract.js';
import { fastKernels } from './fast/registry.js';

/**
 * Counts many requests, those of one kernel together: the same answers as `countPhotons` one by one, and an error where
 * that would throw it.
 */
export function countPhotonsMany(requests: readonly CountRequest[]): (CountResult | PropagationError)[] {
  const answers = new Array<CountResult | PropagationError | null>(requests.length).fill(null);
  for (const kernel of fastKernels) {
    const open: number[] = [];
    requests.forEach((request, i) => {
      const free = answers[i] === null && request.effort.kernel !== 'reference';
      if (free && kernel.supports(request)) open.push(i);
    });
    const results = countWith(
      kernel,
      open.map((i) => requests[i]),
    );
    open.forEach((i, k) => {
      answers[i] = results[k];
    });
  }
  return answers.map((answer, i) => answer ?? attempt(() => countByReference(requests[i])));
}

type Answer = CountResult | PropagationError | null;

function countWith(kernel: FastKernel, requests: readonly CountRequest[]): Answer[] {
  if (!kernel.countMany || requests.length < 2)
    return requests.map((request) => attempt(() => kernel.count(request, countPhotons)));
  return kernel.countMany(requests).map((result, k) => result && completed(requests[k], result));
}

/** Light before a filter is another request. */
function completed(request: CountRequest, result: CountResult): CountResult | PropagationError {
  const { wanted } = request;
  const missing = (name: string) => !(name in result.values);
  if (!request.filter || !(wanted ?? ['mean']).some(missing)) return result;
  const emitted = attempt(() => countPhotons({ ...request, filter: null }));
  if (emitted instanceof PropagationError) return emitted;
  return {
    values: { ...emitted.values, ...result.values },
    populations: emitted.populations,
    steps: result.steps + emitted.steps,
    localErrors: Math.max(result.localErrors, emitted.localErrors),
  };
}

function attempt<T>(work: () => T): T | PropagationError {
  try {
    return work();
  } catch (error) {
    if (error instanceof PropagationError) return error;
    throw error;
  }
}
