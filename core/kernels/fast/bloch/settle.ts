import { distance, EXCITED, FIGURES, rounding } from './figures.js';
import type { BlochProblem } from './problem.js';
import { runBloch } from './run.js';
import { firstCounts, MOST_RECORDED, MOST_STEPS } from './steps.js';
import type { Tape } from './tape.js';

/** Growth of the number of steps between the first two runs, and bounds of what comes after. */
const GROWTH = 1.4;
const LEAST = 1.2;
const MOST = 2;
/** Most runs before the kernel gives up. */
const RUNS = 8;
/** Order of the slowest error left: third order in the rates of the kicks. */
const SLOWEST = 4;
/** Error for which the first guess was fitted. */
const FITTED = 8e-10;
/** Order by which the next number of steps is chosen. */
const EXPECTED = 7;

const coarse = new Float64Array(FIGURES);
const fine = new Float64Array(FIGURES);
const settled = new Float64Array(FIGURES);

/** The finest run, improved by the one before it. */
export interface Settled {
  /** Overwritten by the next call. */
  readonly figures: Float64Array;
  readonly counts: readonly number[];
  /** In the measure of `disagreement`. */
  readonly error: number;
}

/**
 * Runs on finer and finer steps until two neighbours agree. Errors fall with the fourth power of the step or faster, so
 * that the truth lies between the finer run and the point that this power extrapolates to. The middle of the two is
 * returned, which is off by half their distance at most.
 * @param accept error to reach, in the measure of `disagreement`
 * @param tape records the finest run
 * @returns null where the steps run out; an error above what was asked for where rounding alone is more
 */
export function settle(problem: BlochProblem, accept: number, tape: Tape | null = null): Settled | null {
  const finer = (FITTED / accept) ** (1 / EXPECTED);
  let counts = firstCounts(problem).map((n) => Math.ceil(n * finer));
  if (total(counts) > MOST_STEPS) return null;
  runBloch(problem, counts, coarse);
  let factor = GROWTH;
  for (let k = 1; k < RUNS; k++) {
    const next = counts.map((n) => Math.ceil(n * factor));
    const steps = total(next);
    if (steps > MOST_STEPS) return null;
    runBloch(problem, next, fine, steps > MOST_RECORDED ? null : tape);
    const share = 0.5 / ((steps / total(counts)) ** SLOWEST - 1);
    const error = share * distance(coarse, fine);
    if (!Number.isFinite(error)) return null;
    counts = next;
    if (error <= accept) {
      for (let i = 0; i <= EXCITED; i++) settled[i] = fine[i] + share * (fine[i] - coarse[i]);
      return { figures: settled, counts, error: error + rounding(fine) };
    }
    factor = Math.min(MOST, Math.max(LEAST, 1.05 * (error / accept) ** (1 / EXPECTED)));
    coarse.set(fine);
  }
  return null;
}

/** Sum of the steps of all spans. */
export function total(counts: readonly number[]): number {
  let sum = 0;
  for (const n of counts) sum += n;
  return sum;
}
