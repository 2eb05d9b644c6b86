import type { Solution } from '../tasks/solve.js';
import type { Knowledge } from './contract.js';

/** A solution is beaten when the archive has less than this share of its impurity at its level. */
export const BEATEN = 0.999;

/** Nothing in the archive beats it by more than a hair. */
export const standing = (known: Knowledge, { brightness, impurity }: Solution): boolean =>
  !known.front.some((p) => p.brightness >= brightness && p.impurity < BEATEN * impurity);

/**
 * The best solution of each level, by level. One that fell short of its level and yet stands, as at the bright end of
 * the front, counts as one of the level that it reached.
 */
export function bestSolutions(known: Knowledge): Solution[] {
  const best = new Map<number, Solution>();
  for (const solution of known.solutions) {
    if (solution.violation > 1e-4) continue;
    const short = solution.brightness < solution.level - 1e-4;
    if (short && !standing(known, solution)) continue;
    const level = short ? solution.brightness : solution.level;
    const old = best.get(level);
    if (old === undefined || solution.impurity < old.impurity) best.set(level, { ...solution, level });
  }
  return [...best.values()].sort((a, b) => a.level - b.level);
}
