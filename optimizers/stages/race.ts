import { stream } from '../../core/numerics/stream.js';
import { latinHypercube } from '../global/contract.js';
import type { Solution, SolveMethod } from '../tasks/solve.js';
import { type Knowledge, type Plan, rangeOfInterest } from './contract.js';
import { samplePoints } from './enumerate.js';

/** A rung: how many starts go on, and the iterations (value and differences) that each is given. */
interface Rung {
  readonly starts: number;
  readonly iterations: number;
  readonly radius: number;
}

/**
 * Measured on two-tone problems with seven variables: one start in ten lies in the basin of the best branch, a solve
 * takes some 60 iterations to show where it ends, and 8 tell the better half from the worse.
 */
const RUNGS: readonly Rung[] = [
  { starts: 24, iterations: 8, radius: 0.2 },
  { starts: 10, iterations: 16, radius: 0.1 },
  { starts: 5, iterations: 20, radius: 0.1 },
  { starts: 3, iterations: 25, radius: 0.1 },
  { starts: 2, iterations: 25, radius: 0.1 },
];
/** It tells the better starts from the worse in fewer iterations than moving asymptotes. */
const METHOD: SolveMethod = 'sqp';
/** Points of the first look, in iterations. */
const LOOK = 75;
const FULL = RUNGS.reduce((sum, { starts, iterations }) => sum + starts * iterations, LOOK);
/** Share of the budget that a race may take, and what it may grow to when the budget is large. */
const MOST = 0.6;
const LARGE = 0.35;
/** Smaller than this share of a full race it tells nothing. */
const LEAST = 0.25;
/** With fewer variables populations find the branches as well, and cheaper. */
const FEWEST_VARIABLES = 5;
/** Evaluations of an iteration above which solves are too dear to be thrown away. */
const DEAREST = 8;
/** Weight of a missed brightness or limit against the relative impurity. */
const SHORTFALL = 100;

/** Evaluations of a race for what is left of the budget; 0 where none is worth while. */
export function raceBudget(known: Knowledge): number {
  const continuous = known.problem.space.categories.filter((count) => count === 0).length;
  const full = FULL * known.iterationCost;
  const budget = Math.floor(Math.min(MOST * known.left, Math.max(full, LARGE * known.left)));
  if (known.iterationCost > DEAREST) return 0;
  return continuous >= FEWEST_VARIABLES && budget >= LEAST * full ? budget : 0;
}

function* look(known: Knowledge, name: string, count: number): Plan<(readonly number[])[]> {
  const points = latinHypercube(known.problem.space, count, stream(known.spec.search.seed, known.spent));
  const replies = yield* samplePoints(known, name, points);
  const missed = (i: number) => replies[i].constraints.reduce((sum, c) => sum + Math.max(0, c), 0);
  return replies
    .map((_, i) => i)
    .filter((i) => replies[i].impurity !== null)
    .sort((a, b) => missed(a) - missed(b) || replies[b].brightness - replies[a].brightness || a - b)
    .map((i) => points[i]);
}

/** The brightness to race for: where the best design is asked for, or in the upper half of the front. */
function raceLevel(known: Knowledge): number | null {
  const { atLeast, front } = known.spec.goal;
  if (atLeast !== null) return atLeast;
  if (front.from !== null && front.to !== null) return front.from + 0.75 * (front.to - front.from);
  const range = rangeOfInterest(known);
  return range === null ? null : range.from + 0.75 * (range.to - range.from);
}

function byMerit(solutions: readonly Solution[], level: number): Solution[] {
  const scale = Math.min(...solutions.filter((s) => s.brightness >= 0.9 * level).map((s) => s.impurity));
  const least = Number.isFinite(scale) && scale > 0 ? scale : 1;
  const merit = (s: Solution) =>
    s.impurity / least + SHORTFALL * (Math.max(0, level - s.brightness) + s.violation);
  return [...solutions].sort((a, b) => merit(a) - merit(b));
}

/**
 * Many solves from the brightest of evenly spread points, of which fewer and fewer go on: successive halving (Jamieson
 * & Talwalkar, AISTATS 2016) over local solves. For problems whose best branch is one narrow basin among dozens.
 */
export function* race(known: Knowledge, name: string, budget: number): Plan {
  const size = known.iterationCost;
  const scale = budget / (FULL * size);
  const end = known.spent + budget;
  let starts = yield* look(known, `${name}-look`, Math.floor(scale * LOOK * size));
  const level = raceLevel(known);
  if (level === null) return;
  let standing: Solution[] = [];
  for (const [i, rung] of RUNGS.entries()) {
    const each = rung.iterations * size;
    const affordable = Math.floor((end - known.spent) / each);
    const count = Math.min(Math.max(1, Math.round(scale * rung.starts)), affordable, starts.length);
    if (count === 0) return;
    const tasks = starts.slice(0, count).map((start) =>
      known.task(`${name}-${i + 1}`, 'solve', each, {
        level,
        start,
        method: METHOD,
        radius: rung.radius,
        shake: 0,
        exact: known.exact,
      }),
    );
    const results = yield { name: `${name}-${i + 1}`, tasks };
    const fresh = results.flatMap(({ summary }) => (summary === null ? [] : [summary as Solution]));
    known.learn(fresh);
    // A restart can lose ground: what was better before stays in the race.
    standing = byMerit([...fresh, ...standing.slice(0, 2)], level);
    starts = standing.map(({ x }) => x);
  }
}
