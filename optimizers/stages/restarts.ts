import { atLevel } from '../front/levels.js';
import type { Solution } from '../tasks/solve.js';
import { BRANCH_WIDTH, distance, type Knowledge } from './contract.js';

/** Solves that began away from the design that the front ended with at their level, and how many came to it. */
export interface Restarts {
  /**
   * Starts that lay at least a branch's width (0.15 of a range) away, with the same entries of lists: a solve keeps
   * those, so that from another entry it could not come back.
   */
  readonly elsewhere: number;
  /** Of those, the ones that ended within 1 % of the front's impurity at their level. */
  readonly again: number;
}

/** End of a solve that counts as the same design: relative impurity above the front, relative miss of the level. */
const SAME = 0.01;
const MISS = 1e-4;

/** A solve that began exactly where another of its level ended only carries that one on. */
function chains(solutions: readonly Solution[]): Solution[][] {
  const byEnd = new Map<string, Solution[]>();
  const all: Solution[][] = [];
  const key = (level: number, x: readonly number[]) => `${level} ${x.join(' ')}`;
  for (const solution of solutions) {
    const chain = byEnd.get(key(solution.level, solution.start)) ?? [];
    if (chain.length === 0) all.push(chain);
    chain.push(solution);
    byEnd.set(key(solution.level, solution.x), chain);
  }
  return all;
}

/**
 * How often solves from elsewhere found the front again: at every level, or at one.
 * @returns null where no solve was made
 */
export function restartsOf(known: Knowledge, level: number | null): Restarts | null {
  const own = known.solutions.filter((s) => level === null || s.level === level);
  if (own.length === 0) return null;
  let [elsewhere, again] = [0, 0];
  for (const chain of chains(own)) {
    const member = atLevel(known.front, chain[0].level);
    if (member === null) continue;
    const away = distance(known.problem, chain[0].start, known.problem.unitOf(member.values));
    if (away < BRANCH_WIDTH || away === Number.POSITIVE_INFINITY) continue;
    elsewhere++;
    const ended = (s: Solution) =>
      s.brightness >= s.level * (1 - MISS) &&
      s.violation <= MISS &&
      s.impurity <= (1 + SAME) * member.impurity;
    if (chain.some(ended)) again++;
  }
  return { elsewhere, again };
}
