import type { CountResult } from '../count.js';
import { disagreement } from './estimate.js';
import { finer, type StepPlan } from './step-rule.js';

/** Most runs before a kernel gives up. */
const RUNS = 7;
/** Least and largest growth of the number of steps from one run to the next. */
const LEAST = 1.3;
const MOST = 2;
/** Once it is small the error falls with at least the first of these powers of the step; more than the second is never counted on. */
const ORDERS = [4, 6] as const;

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
  let before = Number.NaN;
  for (let k = 1; k < RUNS; k++) {
    plan = finer(plan, factor);
    if (!plan) return null;
    const fine = run(plan);
    const difference = disagreement(coarse.values, fine.values);
    if (!Number.isFinite(difference)) return null;
    const order = observedOrder(before, difference, factor);
    const error = difference / (factor ** order - 1);
    if (error <= accept) return { ...(parts > 1 ? cut(plan) : fine), localErrors: error };
    before = error;
    factor = Math.min(MOST, Math.max(LEAST, 1.05 * (error / accept) ** (1 / 6)));
    coarse = fine;
  }
  return null;
}

/** A difference below this share of what the least order predicts shows the higher one (which predicts half of it, or less). */
const FASTER = 0.6;

/** Order seen between two runs, from the error expected of the coarser one; within bounds. */
function observedOrder(expected: number, difference: number, factor: number): number {
  const [least, most] = ORDERS;
  if (!(difference > 0) || !Number.isFinite(expected)) return least;
  // With the right order the difference of the runs is the coarser one's error, less the finer one's.
  return difference < FASTER * expected * (1 - factor ** -least) ? most : least;
}
