import { hypervolume } from '../front/hypervolume.js';
import { atLevel, levelsOf } from '../front/levels.js';
import type { Judgement } from '../problem/judge.js';
import type { Knowledge, Plan } from './contract.js';
import { cross } from './cross.js';
import { gridOf, samplePoints } from './enumerate.js';
import { explore, scatter } from './explore.js';
import { aimAtLevels, fillBetween } from './fill.js';
import { evenLevels, polishLevels, polishOthers, refine, sweep, tighten } from './polish.js';
import { race, raceBudget } from './race.js';
import { single } from './single.js';
import { slices } from './slices.js';

/** Shares of a round's budget. */
const SHARES = { explore: 0.2, exploreAfterRace: 0.08, polish: 0.7 };
/** Share of what is left for filling that goes to the levels asked for. */
const LEVEL_SHARE = 0.4;
/** Times that solves and looks along the coordinates take turns. */
const PROBES = 3;
/** Gain in impurity, as what is left of it, that makes another look worth while. */
const GAIN = 0.99;
/** Share of a round for the look along the coordinates. */
const CROSS = 0.08;
/** Share of what is left for solves that goes to second opinions. */
const OTHERS = 0.3;
/** Evaluations of the first round; each later one doubles. */
const FIRST_ROUND = 800;
/** Budgets below this are spent on evenly spread points. */
const TINY = 25;
const LEVELS = 5;
/** Evaluations below which another stage of solves is not begun. */
const WORTH = 10;

/** Bounds of the share of a later round that populations get, by what they gained in the last one. */
const LEAST_SHARE = 0.15;
const MOST_SHARE = 0.85;

interface Round {
  readonly number: number;
  readonly budget: number;
  /** Share of the budget for populations. */
  readonly exploring: number;
  /** Starts of solves that were tried already. */
  readonly tried: Set<string>;
}

/** Area that a front covers from the corner of another one, which it may not reach. */
function covered(front: readonly Judgement[], last: readonly Judgement[]): number {
  const [dimmest, brightest] = [last[0], last[last.length - 1]];
  const points = front.map(({ impurity, brightness }) => [impurity, -brightness]);
  return hypervolume(points, [brightest.impurity, -dimmest.brightness]);
}

/**
 * Share of the next round for populations: what they gained an evaluation in this round against what the rest of it
 * did. Where solves get nowhere, as in many variables without derivatives or among many local fronts, populations
 * carry on; where they no longer find anything, the budget goes to solves and points between.
 */
function nextShare(
  fronts: readonly (readonly Judgement[])[],
  spent: readonly number[],
  share: number,
): number {
  const [before, explored, after] = fronts;
  if (before.length === 0 || after.length < 2) return share;
  const [v0, v1, v2] = [before, explored, after].map((front) => covered(front, after));
  const [early, late] = [(v1 - v0) / Math.max(1, spent[0]), (v2 - v1) / Math.max(1, spent[1])];
  if (!(early + late > 0)) return LEAST_SHARE;
  return Math.min(Math.max(early / (early + late), LEAST_SHARE), MOST_SHARE);
}

/** One round: look around, solve at levels, continue from neighbour to neighbour, fill in between. */
function* round(known: Knowledge, { number, budget, exploring, tried }: Round): Plan<number> {
  const name = (what: string) => `${what}-${number}`;
  const end = known.spent + budget;
  const left = () => Math.max(0, end - known.spent);
  const begin = { front: known.front, spent: known.spent };
  // A last round of a few evaluations goes to what is known already.
  if (budget >= TINY) yield* explore(known, name('explore'), Math.floor(exploring * budget));
  const explored = { front: known.front, spent: known.spent };
  const polishEnd = known.spent + Math.floor(SHARES.polish * left());
  const polishLeft = () => Math.max(0, polishEnd - known.spent);
  const { atLeast } = known.spec.goal;
  const levels = [...evenLevels(known, LEVELS), ...(atLeast === null ? [] : [atLeast])];
  // A first few solves, a look around from where they end, and only then the rest: a solve on a poor branch is lost.
  const probes =
    atLeast === null ? evenLevels(known, 4).slice(1, 3) : [atLeast, ...evenLevels(known, 3).slice(1, 2)];
  for (let i = 1; i <= PROBES; i++) {
    const last = probes.map((level) => atLevel(known.front, level)?.impurity ?? Number.POSITIVE_INFINITY);
    if (!(yield* polishLevels(known, name(`probe-${i}`), probes, polishLeft(), tried))) break;
    const gained = probes.some((level, k) => (atLevel(known.front, level)?.impurity ?? 0) < GAIN * last[k]);
    if (i === PROBES || !gained) break;
    yield* cross(known, name(`cross-${i}`), Math.min(polishLeft(), CROSS * budget), number + 0.3 * i);
  }
  yield* polishLevels(known, name('polish'), levels, polishLeft(), tried);
  for (let i = 1, fresh = 0; polishLeft() >= WORTH && fresh < 4 * LEVELS * number; i++) {
    const before = known.solutions.length;
    yield* refine(known, name(`refine-${i}`), polishLeft(), Math.min(2 ** i, 2 * LEVELS), tried);
    if (known.solutions.length === before) break;
    fresh += known.solutions.length - before;
  }
  yield* polishOthers(known, name('second-branch'), levels, Math.floor(OTHERS * polishLeft()));
  for (let i = 1; polishLeft() >= WORTH; i++) {
    const before = known.spent;
    yield* sweep(known, name(`sweep-${i}`), polishLeft(), tried);
    if (known.spent === before) break;
  }
  const aim = Math.floor(LEVEL_SHARE * left());
  yield* fillBetween(known, name('fill'), left() - aim);
  const wanted = levelsOf(known.spec.goal.front, known.front);
  yield* aimAtLevels(known, name('levels'), left());
  yield* tighten(known, name('tighten'), wanted, left());
  yield* aimAtLevels(known, name('levels-again'), left());
  const spent = [explored.spent - begin.spent, known.spent - explored.spent];
  return nextShare([begin.front, explored.front, known.front], spent, exploring);
}

/** The strategy: see `search`. */
export function* plan(known: Knowledge): Plan {
  const { categories } = known.problem.space;
  if (known.spec.search.method !== 'auto' && categories.length > 0) return yield* single(known);
  const continuous = categories.filter((count) => count === 0).length;
  if (continuous === 0) {
    const all = gridOf(categories, 1, known.left);
    if (all === null) yield* explore(known, 'explore', known.left);
    else yield* samplePoints(known, 'enumerate', all);
    return;
  }
  if (known.spec.goal.third !== null) return yield* slices(known, plan);
  if (continuous === 1) {
    const lists = categories.reduce((product, count) => product * Math.max(1, count), 1);
    const steps = Math.min(200, Math.floor((0.5 * known.left) / lists));
    const grid = steps >= 5 ? gridOf(categories, steps, known.left) : null;
    if (grid !== null) yield* samplePoints(known, 'scan', grid);
  }
  if (known.left < TINY) return yield* scatter(known, 'scatter', known.left);
  const contest = raceBudget(known);
  if (contest > 0) yield* race(known, 'race', contest);
  let exploring = contest > 0 ? SHARES.exploreAfterRace : SHARES.explore;
  const tried = new Set<string>();
  for (let number = 1, size = FIRST_ROUND; known.left > 0; number++, size *= 2) {
    const before = known.spent;
    // The last round takes what would be too little for another one.
    const budget = known.left < 1.5 * size ? known.left : size;
    exploring = yield* round(known, { number, budget, exploring, tried });
    if (known.spent === before) return;
  }
}
