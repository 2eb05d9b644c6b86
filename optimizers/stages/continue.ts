import { atLevel } from '../front/levels.js';
import type { Solution } from '../tasks/solve.js';
import { BRANCH_WIDTH, distance, type Knowledge, type Plan } from './contract.js';
import { BEATEN, bestSolutions } from './solutions.js';
import { allowance, CONTINUE, isNew, NEIGHBOUR, type Start, solveAll, unitOf } from './solves.js';

/**
 * Continuation in both directions: a level that another's design serves better is solved again from that design, one
 * without a solution from its neighbours', and where neighbouring levels sit on different branches, each from the
 * other's. Says whether there was anything to try.
 */
export function* sweep(known: Knowledge, name: string, budget: number, tried: Set<string>): Plan<boolean> {
  const solutions = bestSolutions(known);
  const { front } = known;
  const starts: Start[] = [];
  const most = Math.max(1, Math.floor(budget / allowance(known, CONTINUE)));
  const offer = (level: number, x: readonly number[]) => {
    if (starts.length < most && isNew(tried, level, x)) starts.push({ level, x, ...CONTINUE });
  };
  for (const solution of solutions) {
    const member = atLevel(front, solution.level);
    if (member !== null && member.impurity < BEATEN * solution.impurity)
      offer(solution.level, unitOf(known, member));
  }
  const solved = new Set(solutions.map((solution) => solution.level));
  for (const level of new Set(known.solutions.map((solution) => solution.level))) {
    if (solved.has(level)) continue;
    const above = solutions.find((solution) => solution.level > level);
    const below = solutions.filter((solution) => solution.level < level).at(-1);
    for (const neighbour of [below, above]) if (neighbour !== undefined) offer(level, neighbour.x);
  }
  for (let i = 0; i + 1 < solutions.length; i++) {
    const [low, high] = [solutions[i], solutions[i + 1]];
    if (distance(known.problem, low.x, high.x) < BRANCH_WIDTH) continue;
    offer(low.level, high.x);
    offer(high.level, low.x);
  }
  yield* solveAll(known, name, starts, budget);
  return starts.length > 0;
}

/** The brightest member of the archive, where it lies beyond all solutions. */
function brightEnd(known: Knowledge): Knot[] {
  const brightest = known.front[known.front.length - 1];
  const last = bestSolutions(known).at(-1);
  if (brightest === undefined || last === undefined || brightest.brightness <= last.level) return [];
  return [{ level: brightest.brightness, x: unitOf(known, brightest), impurity: brightest.impurity }];
}

type Knot = Pick<Solution, 'level' | 'x' | 'impurity'>;

/** Longest step ahead along a branch, in steps between its last two solutions. */
const LONGEST = 2;

/** Where a branch through two solutions leads at a higher level, by a secant. */
function ahead(before: Knot, low: Knot, level: number): number[] {
  const ratio = Math.min(LONGEST, (level - low.level) / (low.level - before.level));
  return low.x.map((value, k) => Math.min(Math.max(value + ratio * (value - before.x[k]), 0), 1));
}

/** Gaps that are this share of the front's whole range are left, within a branch and between two. */
const SMALL_GAP = 5e-4;
const SMALL_JUMP = 1e-5;

/**
 * New levels between neighbouring solutions, where the front may gain the most: from the point between the two; on
 * different branches from the lower one, which is purer, and next time from the upper one.
 */
export function* refine(
  known: Knowledge,
  name: string,
  budget: number,
  count: number,
  tried: Set<string>,
): Plan<boolean> {
  const solutions: Knot[] = [...bestSolutions(known), ...brightEnd(known)];
  const gaps = solutions.slice(1).map((high, i) => ({ low: solutions[i], high }));
  const size = ({ low, high }: (typeof gaps)[number]) =>
    (high.level - low.level) * Math.max(0, high.impurity - low.impurity);
  const one = ({ low, high }: (typeof gaps)[number]) => distance(known.problem, low.x, high.x) < BRANCH_WIDTH;
  const [first, last] = [solutions[0], solutions[solutions.length - 1]];
  const whole = gaps.length > 0 ? size({ low: first, high: last }) : 0;
  const widest = gaps
    .filter((gap) => size(gap) > (one(gap) ? SMALL_GAP : SMALL_JUMP) * whole)
    .sort((a, b) => size(b) - size(a));
  const starts = widest.slice(0, count).flatMap(({ low, high }): Start[] => {
    const level = (low.level + high.level) / 2;
    if (one({ low, high })) {
      return [{ level, x: low.x.map((value, k) => (value + high.x[k]) / 2), ...NEIGHBOUR }];
    }
    const from = [low, high].find(({ x }) => isNew(tried, level, x));
    if (from === undefined) return [];
    const before = from === low ? solutions[solutions.indexOf(low) - 1] : undefined;
    return [
      {
        level,
        x: before && one({ low: before, high: low }) ? ahead(before, low, level) : from.x,
        ...CONTINUE,
      },
    ];
  });
  yield* solveAll(known, name, starts, budget);
  return starts.length > 0;
}
