import type { CountResult } from '../../count.js';
import { disagreement } from '../estimate.js';

/** Growth of the steps from one run to the next. */
const GROWTH = 1.3;
/** Most runs of one series. */
const RUNS = 5;
/** The extrapolated value is better than its difference from the one without the coarsest run by at least this. */
const GAIN = 1.2;
/** An error is not believed to have fallen by more than this from one run to the next. */
const FALL = 50;
/** Nor an extrapolated value to be better than its difference from the finest run of a shared series by more than this. */
const TRUST = 2;
/** Accuracy of populations over that of probabilities. */
const POPULATIONS = 0.1;

/** The extrapolated result with the runs behind it. */
export interface Series<R> {
  readonly result: CountResult;
  readonly runs: readonly R[];
  readonly weights: readonly number[];
}

/**
 * Runs on finer and finer steps. Their errors have a series h⁴, h⁶, … (the h² term is taken out step by step), of which
 * every further run takes out one more term (Richardson; Hairer, Nørsett & Wanner, Solving Ordinary Differential Equations
 * I, section II.9), until leaving out the coarsest run makes no difference.
 * @param first steps per span of the first run
 * @param accept error to reach, in the measure of `disagreement`
 * @param parts the accepted series is repeated with every step cut into this many
 * @returns null when the runs run out
 */
export function refine<R extends { readonly result: CountResult }>(
  first: readonly number[],
  accept: number,
  run: (counts: readonly number[]) => R | null,
  parts: number,
): Series<R> | null {
  const found = series(first, accept, run, null);
  if (!found || parts === 1) return found;
  const finer = first.map((n) => n * parts);
  const fine = series(finer, accept, run, found.runs.length);
  return fine && { ...fine, result: { ...fine.result, localErrors: found.result.localErrors } };
}

function series<R extends { readonly result: CountResult }>(
  first: readonly number[],
  accept: number,
  run: (counts: readonly number[]) => R | null,
  exactly: number | null,
): Series<R> | null {
  const runs: R[] = [];
  let previous = 0;
  for (let k = 0; k < (exactly ?? RUNS); k++) {
    const found = run(first.map((n) => Math.ceil(n * GROWTH ** k)));
    if (!found) return null;
    runs.push(found);
    if (k === 0) continue;
    const results = runs.map((r) => r.result);
    const { result, weights } = extrapolated(results);
    const change = difference(extrapolated(results.slice(1)).result, result) / GAIN;
    // Two values can agree by chance; three in a row do not.
    const error = Math.max(change, previous / FALL);
    previous = change;
    if (!Number.isFinite(error)) return null;
    if (exactly === null ? error <= accept : k + 1 === exactly) {
      const steps = results.reduce((sum, r) => sum + r.steps, 0);
      return { result: { ...result, steps, localErrors: error }, runs, weights };
    }
  }
  return null;
}

/** Runs that share one table of rotations: steps of a sixth, kicks after every third, every second and every one. */
const SHARED = { finest: 6, kicks: [2, 3, 6] };
/** Shared series before a kernel gives up, and growth of the steps to the next where an error was nearly met or not. */
const ROUNDS = 4;
const ROUND_GROWTH = { near: 1.25, far: 1.6 };
/** Error over the accepted one that counts as nearly met. */
const NEAR = 20;

/**
 * Series of three runs on the steps of one table of rotations.
 * @param first a sixth of the steps per span of the first table
 * @param parts every step of the accepted series is cut into this many
 */
export function refineShared<T, R extends { readonly result: CountResult }>(
  first: readonly number[],
  accept: number,
  tabulate: (counts: readonly number[]) => { readonly tables: T; readonly error: number },
  run: (counts: readonly number[], tables: T) => R | null,
  parts: number,
): Series<R> | null {
  let total = 0;
  let factor = 1;
  for (let k = 0; k < ROUNDS; k++) {
    const base = first.map((n) => Math.ceil(n * factor));
    const found = threeRuns(base, tabulate, run);
    if (!found || !Number.isFinite(found.result.localErrors)) return null;
    total += found.result.steps;
    if (found.result.localErrors > accept) {
      factor *= found.result.localErrors < NEAR * accept ? ROUND_GROWTH.near : ROUND_GROWTH.far;
      continue;
    }
    if (parts === 1) return { ...found, result: { ...found.result, steps: total } };
    const fine = threeRuns(
      base.map((n) => n * parts),
      tabulate,
      run,
    );
    return fine && { ...fine, result: { ...fine.result, localErrors: found.result.localErrors } };
  }
  return null;
}

function threeRuns<T, R extends { readonly result: CountResult }>(
  base: readonly number[],
  tabulate: (counts: readonly number[]) => { readonly tables: T; readonly error: number },
  run: (counts: readonly number[], tables: T) => R | null,
): Series<R> | null {
  const { tables, error } = tabulate(base.map((n) => SHARED.finest * n));
  const runs: R[] = [];
  for (const factor of SHARED.kicks) {
    const found = run(
      base.map((n) => factor * n),
      tables,
    );
    if (!found) return null;
    runs.push(found);
  }
  const results = runs.map((r) => r.result);
  const { result, weights } = extrapolated(results);
  const two = extrapolated(results.slice(1)).result;
  const kicks = Math.max(difference(two, result) / GAIN, difference(results[2], two) / TRUST);
  const steps = results.reduce((sum, r) => sum + r.steps, 0);
  return { result: { ...result, steps, localErrors: Math.max(kicks, error) }, runs, weights };
}

function difference(a: CountResult, b: CountResult): number {
  return b.populations.reduce(
    (worst, p, i) => Math.max(worst, POPULATIONS * Math.abs(p - a.populations[i])),
    disagreement(a.values, b.values),
  );
}

/** The value at h = 0 of a + b h⁴ + c h⁶ + … through all results. */
function extrapolated(results: readonly CountResult[]): { result: CountResult; weights: number[] } {
  const last = results[results.length - 1];
  const weights = weightsOf(results.map((r) => (last.steps / r.steps) ** 2));
  const sum = (read: (r: CountResult) => number): number =>
    results.reduce((total, r, i) => total + weights[i] * read(r), 0);
  const result = {
    ...last,
    values: Object.fromEntries(Object.keys(last.values).map((name) => [name, sum((r) => r.values[name])])),
    populations: last.populations.map((_, i) => sum((r) => r.populations[i])),
  };
  return { result, weights };
}

/** Weights with Σw = 1 and Σw x² = Σw x³ = … = 0, by elimination. */
function weightsOf(x: readonly number[]): number[] {
  const n = x.length;
  const rows = Array.from({ length: n }, (_, q) => x.map((v) => (q === 0 ? 1 : v ** (q + 1))));
  const right: number[] = rows.map((_, q) => (q === 0 ? 1 : 0));
  for (let i = 0; i < n; i++) {
    let most = i;
    for (let r = i + 1; r < n; r++) if (Math.abs(rows[r][i]) > Math.abs(rows[most][i])) most = r;
    [rows[i], rows[most]] = [rows[most], rows[i]];
    [right[i], right[most]] = [right[most], right[i]];
    for (let r = i + 1; r < n; r++) {
      const factor = rows[r][i] / rows[i][i];
      for (let c = i; c < n; c++) rows[r][c] -= factor * rows[i][c];
      right[r] -= factor * right[i];
    }
  }
  const weights = new Array<number>(n).fill(0);
  for (let i = n - 1; i >= 0; i--) {
    let v = right[i];
    for (let c = i + 1; c < n; c++) v -= rows[i][c] * weights[c];
    weights[i] = v / rows[i][i];
  }
  return weights;
}
