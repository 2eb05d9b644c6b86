import { atLevel } from '../front/levels.js';
import type { JudgedPoint } from '../tasks/recorder.js';
import type { Solution } from '../tasks/solve.js';
import { BRANCH_WIDTH, distance, type Knowledge, type Plan, rangeOfInterest } from './contract.js';

/** A start for the least impurity at a level. */
interface Start extends Reach {
  readonly level: number;
  readonly x: readonly number[];
}

/** How far a solve may be from its end: first trust radius, shake of its start, iterations of a value and a gradient. */
interface Reach {
  readonly far: boolean;
  readonly radius: number;
  readonly shake: number;
  readonly iterations: number;
}

/** From anywhere. */
const JUMP: Reach = { far: true, radius: 0.2, shake: 0.02, iterations: 24 };
/** On the right branch, perhaps. */
const CONTINUE: Reach = { far: true, radius: 0.1, shake: 0.02, iterations: 20 };
/** Next to its end. */
const NEIGHBOUR: Reach = { far: true, radius: 0.03, shake: 0, iterations: 12 };

/** Iterations below which a solve is not begun. */
const FEWEST = 4;

/** Evaluations a solve may take. */
const allowance = (known: Knowledge, { iterations }: Reach) => iterations * known.iterationCost;

/** Solves from all starts that fit into `budget`, side by side; keeps where they end. */
function* solveAll(known: Knowledge, name: string, starts: readonly Start[], budget: number): Plan {
  let left = Math.min(budget, known.left);
  const tasks = [];
  for (const start of starts) {
    const { level, x, far, radius, shake } = start;
    const each = Math.floor(Math.min(allowance(known, start), left));
    // A last one may be cut short, but not to nothing.
    if (each < Math.min(allowance(known, start), FEWEST * known.iterationCost)) break;
    left -= each;
    tasks.push(known.task(name, 'solve', each, { level, start: x, far, radius, shake, exact: known.exact }));
  }
  if (tasks.length === 0) return;
  const results = yield { name, tasks };
  known.learn(results.flatMap(({ summary }) => (summary === null ? [] : [summary as Solution])));
}

/** Evenly spaced levels over the range of interest, ends included. */
export function evenLevels(known: Knowledge, count: number): number[] {
  const range = rangeOfInterest(known);
  if (range === null) return [];
  const { from, to } = range;
  if (from === to || count === 1) return [to];
  return Array.from({ length: count }, (_, i) => from + ((to - from) * i) / (count - 1));
}

const unitOf = (known: Knowledge, point: JudgedPoint) => known.problem.unitOf(point.values);

/** The best member of the archive at a level, or the brightest one where the level is out of reach. */
function memberAt(known: Knowledge, level: number): readonly number[] | null {
  const { front } = known;
  const member = atLevel(front, level) ?? front[front.length - 1];
  if (member !== undefined) return unitOf(known, member);
  // Nothing meets the limits yet: a solve goes on from what comes nearest to them.
  const { point } = known.nearest;
  return point === null ? null : known.problem.unitOf(point.values);
}

/** A solution is beaten when the archive has less than this share of its impurity at its level. */
const BEATEN = 0.999;

/** Share of a level below which a design says nothing about it. */
const DIM = 0.6;

/**
 * Where solves at a level may begin: at the archive's member of that level, and, where that is on another branch, at
 * the brightest one below, which is purer.
 */
function startsAt(known: Knowledge, level: number): (readonly number[])[] {
  const x = memberAt(known, level);
  if (x === null) return [];
  const below = known.front.filter(({ brightness }) => brightness < level && brightness >= DIM * level);
  const others = below.map((point) => unitOf(known, point));
  const other = others.findLast((y) => distance(known.problem, x, y) >= BRANCH_WIDTH);
  return other === undefined ? [x] : [x, other];
}

/** From the archive at each level that has no solution yet or a beaten one, and from where nothing was tried. */
export function* polishLevels(
  known: Knowledge,
  name: string,
  levels: readonly number[],
  budget: number,
  tried: Set<string>,
): Plan<boolean> {
  const solved = new Map(bestSolutions(known).map((solution) => [solution.level, solution]));
  const starts = levels.flatMap((level) => {
    const own = solved.get(level);
    const better = atLevel(known.front, level)?.impurity ?? 0;
    return startsAt(known, level).flatMap((x, i): Start[] => {
      if (i === 0 && own !== undefined && better >= BEATEN * own.impurity) return [];
      return isNew(tried, level, x) ? [{ level, x, ...JUMP }] : [];
    });
  });
  yield* solveAll(known, name, starts, budget);
  return starts.length > 0;
}

/** Notes a start; false where one as near was noted before. */
function isNew(tried: Set<string>, level: number, x: readonly number[]): boolean {
  const key = `${level} ${x.map((value) => value.toFixed(2)).join(' ')}`;
  if (tried.has(key)) return false;
  tried.add(key);
  return true;
}

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

/** Excess brightness, as a share of the level, above which a level is worth a solve of its own. */
const SLACK = 1e-4;

/** Solves the levels that are served by a design noticeably brighter than asked for, the worst served first. */
export function* tighten(known: Knowledge, name: string, levels: readonly number[], budget: number): Plan {
  const { front } = known;
  const loose = levels.flatMap((level) => {
    const member = atLevel(front, level);
    if (member === null || member.brightness <= level * (1 + SLACK)) return [];
    return [{ start: { level, x: unitOf(known, member), ...NEIGHBOUR }, slack: member.brightness - level }];
  });
  const starts = loose.sort((a, b) => b.slack - a.slack).map(({ start }) => start);
  yield* solveAll(known, name, starts, budget);
}

/** A second opinion at a level: solves from members of the islands' populations that are far from the best one. */
export function* polishOthers(
  known: Knowledge,
  name: string,
  levels: readonly number[],
  budget: number,
): Plan {
  const others = known.islands.flat();
  const taken = levels.flatMap((level) => {
    const member = memberAt(known, level);
    return member === null ? [] : [member];
  });
  const starts: Start[] = [];
  for (const x of others) {
    if (taken.some((old) => distance(known.problem, old, x) < BRANCH_WIDTH)) continue;
    taken.push(x);
    starts.push({ level: levels[starts.length % levels.length], x, ...JUMP });
  }
  yield* solveAll(known, name, starts, budget);
}
