import { atLevel } from '../front/levels.js';
import type { JudgedPoint } from '../tasks/recorder.js';
import type { Solution } from '../tasks/solve.js';
import { BRANCH_WIDTH, distance, type Knowledge, type Plan, rangeOfInterest } from './contract.js';

/** A start for the least impurity at a level. */
interface Start {
  readonly level: number;
  readonly x: readonly number[];
  readonly radius: number;
}

const JUMP_RADIUS = 0.2;
const CONTINUE_RADIUS = 0.05;
const NEIGHBOUR_RADIUS = 0.02;

/** Evaluations a solve may take: some iterations of one value and one gradient each. */
const allowance = (known: Knowledge, iterations = 16) => iterations * known.iterationCost;
/** Iterations of a solve that begins next to its end. */
const SHORT = 6;
/** Iterations of a solve that begins on the right branch, perhaps. */
const MEDIUM = 10;

/** Solves from all starts that fit into `budget`, side by side; keeps where they end. */
function* solveAll(
  known: Knowledge,
  name: string,
  starts: readonly Start[],
  budget: number,
  most = allowance(known),
): Plan {
  const each = Math.min(most, budget);
  const affordable = each > 0 ? starts.slice(0, Math.floor(Math.min(budget, known.left) / each)) : [];
  if (affordable.length === 0) return;
  const tasks = affordable.map(({ level, x, radius }) =>
    known.task(name, 'solve', each, { level, start: x, radius, exact: known.exact }),
  );
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

/** From the archive's member at each level that has no solution yet or a beaten one. */
export function* polishLevels(
  known: Knowledge,
  name: string,
  levels: readonly number[],
  budget: number,
): Plan {
  const solved = new Map(bestSolutions(known).map((solution) => [solution.level, solution]));
  const starts = levels.flatMap((level) => {
    const x = memberAt(known, level);
    const own = solved.get(level)?.impurity ?? Number.POSITIVE_INFINITY;
    const better = atLevel(known.front, level)?.impurity ?? 0;
    return x === null || better >= BEATEN * own ? [] : [{ level, x, radius: JUMP_RADIUS }];
  });
  yield* solveAll(known, name, starts, budget);
}

/** The best solution of each level, by level. */
export function bestSolutions(known: Knowledge): Solution[] {
  const best = new Map<number, Solution>();
  for (const solution of known.solutions) {
    if (solution.brightness < solution.level - 1e-4 || solution.violation > 1e-4) continue;
    const old = best.get(solution.level);
    if (old === undefined || solution.impurity < old.impurity) best.set(solution.level, solution);
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
  const offer = (level: number, x: readonly number[]) => {
    const key = `${level} ${x.map((value) => value.toFixed(3)).join(' ')}`;
    if (tried.has(key) || starts.length >= Math.max(1, Math.floor(budget / allowance(known, MEDIUM)))) return;
    tried.add(key);
    starts.push({ level, x, radius: CONTINUE_RADIUS });
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
  yield* solveAll(known, name, starts, budget, allowance(known, MEDIUM));
  return starts.length > 0;
}

/** New levels between neighbouring solutions, from the point between them (or from both, on different branches). */
export function* refine(known: Knowledge, name: string, budget: number, count: number): Plan<boolean> {
  const solutions = bestSolutions(known);
  const gaps = solutions.slice(1).map((high, i) => ({ low: solutions[i], high }));
  const size = ({ low, high }: (typeof gaps)[number]) => high.level - low.level;
  const smallest = 1e-4 * (solutions.length > 0 ? solutions[solutions.length - 1].level : 0);
  const widest = gaps.filter((gap) => size(gap) > smallest).sort((a, b) => size(b) - size(a));
  const starts = widest.flatMap(({ low, high }): Start[] => {
    const level = (low.level + high.level) / 2;
    if (distance(known.problem, low.x, high.x) >= BRANCH_WIDTH) {
      return [low, high].map(({ x }) => ({ level, x, radius: NEIGHBOUR_RADIUS }));
    }
    return [{ level, x: low.x.map((value, k) => (value + high.x[k]) / 2), radius: NEIGHBOUR_RADIUS }];
  });
  yield* solveAll(known, name, starts.slice(0, count), budget, allowance(known, SHORT));
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
    return [{ level, x: unitOf(known, member), radius: NEIGHBOUR_RADIUS, slack: member.brightness - level }];
  });
  const starts = loose
    .sort((a, b) => b.slack - a.slack)
    .map(({ level, x, radius }) => ({ level, x, radius }));
  const each = allowance(known, SHORT);
  yield* solveAll(known, name, starts.slice(0, Math.floor(budget / each)), budget, each);
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
    starts.push({ level: levels[starts.length % levels.length], x, radius: JUMP_RADIUS });
  }
  yield* solveAll(known, name, starts, budget);
}
