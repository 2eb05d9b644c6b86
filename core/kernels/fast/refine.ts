import type { CountResult } from '../count.js';
import { disagreement } from './estimate.js';
import { finer, type StepPlan } from './step-rule.js';

/** Most runs before a kernel gives up. */
const RUNS = 7;
/** Least and largest growth of the number of steps from one run to the next. */
const LEAST = 1.3;
const MOST = 2;
/** The error of every method here falls at least with this power of the step once it is small. */
const ORDER = 4;

/**
 * Runs on finer and finer steps until two neighbours agree. The error of the finer one follows from their difference
 * by the least order, so the estimate is on the safe side where the error falls faster.
 * @param accept error to reach, in the measure of `disagreement`
 * @param parts every step of the accepted run is cut into this many
 * @returns null when the steps run out
 */
export function refine(
  first: StepPlan,
  accept: number,
  run: (plan: StepPlan) => CountResult,
  cut: (plan: StepPlan) => CountResult,
  parts: number,
): CountResult | null {
  let plan = finer(first, 1);
  if (!plan) return null;
  let coarse = run(plan);
  let factor = LEAST;
  for (let k = 1; k < RUNS; k++) {
    plan = finer(plan, factor);
    if (!plan) return null;
    const fine = run(plan);
    const error = disagreement(coarse.values, fine.values) / (factor ** ORDER - 1);
    if (!Number.isFinite(error)) return null;
    if (error <= accept) return { ...(parts > 1 ? cut(plan) : fine), localErrors: error };
    factor = Math.min(MOST, Math.max(LEAST, 1.05 * (error / accept) ** (1 / 6)));
    coarse = fine;
  }
  return null;
}
