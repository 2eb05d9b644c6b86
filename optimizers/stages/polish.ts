import { atLevel } from '../front/levels.js';
import { BRANCH_WIDTH, distance, type Knowledge, type Plan, rangeOfInterest } from './contract.js';
import { BEATEN, bestSolutions } from './solutions.js';
import { isNew, JUMP, NEIGHBOUR, type Start, solveAll, unitOf } from './solves.js';

/** Evenly spaced levels over the range of interest, ends included. */
export function evenLevels(known: Knowledge, count: number): number[] {
  const range = rangeOfInterest(known);
  if (range === null) return [];
  const { from, to } = range;
  if (from === to || count === 1) return [to];
  return Array.from({ length: count }, (_, i) => from + ((to - from) * i) / (count - 1));
}

/** The best member of the archive at a level, or the brightest one where the level is out of reach. */
function memberAt(known: Knowledge, level: number): readonly number[] | null {
  const { front } = known;
  const member = atLevel(front, level) ?? front[front.length - 1];
  if (member !== undefined) return unitOf(known, member);
  // Nothing meets the limits yet: a solve goes on from what comes nearest to them.
  const { point } = known.nearest;
  return point === null ? null : known.problem.unitOf(point.values);
}

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
