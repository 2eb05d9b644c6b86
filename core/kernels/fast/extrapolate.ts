import type { CountResult } from '../count.js';
import { disagreement } from './estimate.js';

/** Numbers of steps of the runs, relative to the first. */
const SEQUENCE = [1, 1.25, 1.5, 1.8, 2.2, 2.7];
/** Runs before the first comparison. */
const FEWEST = 3;
/** The last extrapolated value is better than its difference from the one before by at least this. */
const GAIN = 1.5;

type Values = Readonly<Record<string, number>>;

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
  const found = series(steps, accept, run, null);
  if (!found || parts === 1) return found?.result ?? null;
  const fine = series(steps * parts, accept, run, found.runs);
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
    const all = atZero(inverse, results.map(flat));
    const fewer = atZero(inverse.slice(1), results.slice(1).map(flat));
    const error = disagreement(fewer, all) / GAIN;
    if (!Number.isFinite(error)) return null;
    if (exactly === null && error > accept) continue;
    return { result: { ...unflat(all, result), steps: total, localErrors: error }, runs: results.length };
  }
  return null;
}

const POPULATION = 'population ';

function flat(result: CountResult): Values {
  const out: Record<string, number> = { ...result.values };
  result.populations.forEach((p, i) => {
    out[POPULATION + i] = p;
  });
  return out;
}

function unflat(values: Values, like: CountResult): CountResult {
  const names = Object.keys(like.values);
  return {
    ...like,
    values: Object.fromEntries(names.map((name) => [name, values[name]])),
    populations: like.populations.map((_, i) => values[POPULATION + i]),
  };
}

/** Value at x = 0 of the polynomial through (x_i, values_i). */
function atZero(x: readonly number[], values: readonly Values[]): Values {
  const weights = x.map((xi, i) => x.reduce((w, xj, j) => (j === i ? w : (w * xj) / (xj - xi)), 1));
  const out: Record<string, number> = {};
  for (const name of Object.keys(values[0])) {
    out[name] = values.reduce((sum, v, i) => sum + weights[i] * v[name], 0);
  }
  return out;
}
