import type { CountResult } from '../count.js';
import { disagreement } from './estimate.js';

/** Numbers of steps of the runs, relative to the first. */
const SEQUENCE = [1, 1.25, 1.5, 1.8, 2.2, 2.7];
/** Runs before the first comparison. */
const FEWEST = 3;
/** The last extrapolated value is better than its difference from the one before by at least this. */
const GAIN = 1.5;

/** A failed series is begun once more with this many times the steps. */
const AGAIN = 2.2;

/**
 * Extrapolates results with an error series in h² (Aitken–Neville) over runs on more and more steps, until the value from
 * all runs and the one without the first agree.
 * @returns null when the runs run out
 */
export function extrapolate(
  steps: number,
  accept: number,
  run: (steps: number) => CountResult | null,
  parts: number,
): CountResult | null {
  let first = steps;
  let found = series(first, accept, run, null);
  if (!found) {
    first = Math.ceil(AGAIN * steps);
    found = series(first, accept, run, null);
  }
  if (!found || parts === 1) return found?.result ?? null;
  const fine = series(first * parts, accept, run, found.runs);
  return fine && { ...fine.result, localErrors: found.result.localErrors };
}

function series(
  steps: number,
  accept: number,
  run: (steps: number) => CountResult | null,
  exactly: number | null,
): { result: CountResult; runs: number } | null {
  const results: CountResult[] = [];
  const inverse: number[] = [];
  let total = 0;
  for (const factor of SEQUENCE) {
    const count = Math.ceil(steps * factor);
    const result = run(count);
    if (!result) return null;
    results.push(result);
    inverse.push(1 / count ** 2);
    total += count;
    if (results.length < (exactly ?? FEWEST)) continue;
    const all = atZero(inverse, results, 0);
    const error = disagreement(atZero(inverse, results, 1).values, all.values) / GAIN;
    if (!Number.isFinite(error)) return null;
    if (exactly === null && error > accept) continue;
    return { result: { ...all, steps: total, localErrors: error }, runs: results.length };
  }
  return null;
}

/** Value at x = 0 of the polynomials through the results from number `from` on, at x. */
function atZero(x: readonly number[], results: readonly CountResult[], from: number): CountResult {
  const used = x.slice(from);
  const weights = used.map((xi, i) => used.reduce((w, xj, j) => (j === i ? w : (w * xj) / (xj - xi)), 1));
  const values: Record<string, number> = {};
  for (const name of Object.keys(results[0].values)) {
    let sum = 0;
    for (let k = 0; k < weights.length; k++) sum += weights[k] * results[from + k].values[name];
    values[name] = sum;
  }
  const populations = results[0].populations.map((_, i) =>
    weights.reduce((sum, w, k) => sum + w * results[from + k].populations[i], 0),
  );
  return { ...results[0], values, populations };
}
