import type { FilteredRun } from './run.js';

/** Growth of the number of steps from one run to the next: least, most. */
const GROWTH = [1.3, 2] as const;
/** Most runs, and most of them that are extrapolated together. */
const RUNS = 9;
const TOGETHER = 4;
/** Order in which what is left after extrapolation falls, at least. */
const ORDER = 5;
/** Largest difference of populations in units of what is accepted: they have no series in h to be extrapolated. */
const POPULATIONS = 0.1;

export interface Converged {
  readonly result: FilteredRun;
  /** Steps of the last run, and of all. */
  readonly last: number;
  readonly steps: number;
  /** In the measure of `disagreement`. */
  readonly error: number;
}

/**
 * Runs on more and more steps. What one run leaves is a series h⁴, h⁶, … (step.ts); it is extrapolated away (Aitken–Neville)
 * until the value from all runs and that without the first agree.
 * @returns null when the steps run out
 */
export function converge(
  first: number,
  accept: number,
  most: number,
  run: (steps: number) => FilteredRun,
): Converged | null {
  const runs: { readonly count: number; readonly run: FilteredRun }[] = [];
  let count = first;
  let steps = 0;
  while (runs.length < RUNS && count <= most) {
    runs.push({ count, run: run(count) });
    steps += count;
    if (runs.length === 1) {
      count = Math.ceil(count * GROWTH[0]);
      continue;
    }
    const used = runs.slice(-TOGETHER);
    const all = extrapolated(used);
    // Two runs do not show whether the series holds: then their whole difference counts.
    const other = used.length === 2 ? runs[0].run : extrapolated(used.slice(1));
    const error = difference(other, used.length === 2 ? runs[1].run : all, used);
    if (!Number.isFinite(error)) return null;
    if (error <= accept) return { result: all, last: count, steps, error };
    const growth = 1.05 * (error / accept) ** (1 / ORDER);
    count = Math.ceil(count * Math.min(GROWTH[1], Math.max(GROWTH[0], growth)));
  }
  return null;
}

type Runs = readonly { readonly count: number; readonly run: FilteredRun }[];

function extrapolated(runs: Runs): FilteredRun {
  const last = runs[runs.length - 1].run;
  const weights = extrapolationWeights(runs.map((r) => r.count));
  return {
    ...last,
    moments: last.moments.map((_, k) => weights.reduce((sum, w, i) => sum + w * runs[i].run.moments[k], 0)),
  };
}

/**
 * Weights of runs that take the terms h⁴, h⁶, … out: Σw = 1, Σ w N^{−2j} = 0 for j = 2 … number of runs. With x = N^{−2} and
 * Lagrange's weights ℓ of the value at x = 0 they are ℓ/x over Σ 1/x.
 */
export function extrapolationWeights(counts: readonly number[]): number[] {
  const x = counts.map((n) => (counts[counts.length - 1] / n) ** 2);
  const total = x.reduce((sum, xi) => sum + 1 / xi, 0);
  return x.map((xi, i) => x.reduce((w, xj, j) => (j === i ? w : (w * xj) / (xj - xi)), 1 / (xi * total)));
}

/** Relative accuracy over absolute accuracy, and the smallest value at which it is promised (../estimate.ts). */
const RELATIVE = 1e-3;
const FLOOR = 1e-7;
/** (k − 1)/k!: weight of m_k in P(n≥2). */
const WEIGHTS = [0, 0, 1 / 2, 1 / 3, 1 / 8, 1 / 30, 1 / 144];

/** `disagreement` of the moments, without names; populations count as far as they show that the motion is not resolved. */
function difference(fewer: FilteredRun, all: FilteredRun, runs: Runs): number {
  const [before, last] = runs.slice(-2);
  const a = fewer.moments;
  const b = all.moments;
  const multiphoton = b.length > 2 ? b[1] / 2 - b[2] / 3 : 0;
  let worst = 0;
  const take = (change: number, size: number): void => {
    const relative = Math.abs(change) / Math.max(size, FLOOR);
    if (!(relative <= worst)) worst = relative;
  };
  for (let k = 1; k <= b.length; k++) {
    const weight = k > 2 ? WEIGHTS[k] : 1;
    const size = weight * Math.abs(b[k - 1]);
    take(weight * (a[k - 1] - b[k - 1]), k > 2 ? Math.max(size, multiphoton) : size);
  }
  if (b.length > 1 && a[0] > 0 && b[0] > 0) {
    const g = b[1] / b[0] ** 2;
    take(a[1] / a[0] ** 2 - g, g);
  }
  const motion = Math.abs(before.run.populations[1] - last.run.populations[1]);
  return Math.max(RELATIVE * worst, POPULATIONS * motion);
}

export function named({ moments }: FilteredRun): Record<string, number> {
  const values: Record<string, number> = {};
  moments.forEach((m, k) => {
    values[`m${k + 1}`] = m;
  });
  return values;
}
