import { atLevel, levelsOf } from '../front/levels.js';
import { refine, sweep } from './continue.js';
import type { Knowledge, Plan } from './contract.js';
import { cross } from './cross.js';
import { explore } from './explore.js';
import { aimAtLevels, fillBetween } from './fill.js';
import { evenLevels, polishLevels, polishOthers, tighten } from './polish.js';
import { nextShare } from './share.js';

/** Share of what populations leave of a round that goes to solves. */
const POLISH = 0.7;
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
const LEVELS = 5;
/** Evaluations below which another stage of solves is not begun. */
const WORTH = 10;
/** Budgets below this are too small for a population. */
export const TINY = 25;

export interface Round {
  readonly number: number;
  readonly budget: number;
  /** Share of the budget for populations. */
  readonly exploring: number;
  /** Starts of solves that were tried already. */
  readonly tried: Set<string>;
}

/** One round: look around, solve at levels, continue from neighbour to neighbour, fill in between. */
export function* round(known: Knowledge, { number, budget, exploring, tried }: Round): Plan<number> {
  const name = (what: string) => `${what}-${number}`;
  const end = known.spent + budget;
  const left = () => Math.max(0, end - known.spent);
  const begin = { front: known.front, spent: known.spent };
  // A last round of a few evaluations goes to what is known already.
  if (budget >= TINY) yield* explore(known, name('explore'), Math.floor(exploring * budget));
  const explored = { front: known.front, spent: known.spent };
  const polishEnd = known.spent + Math.floor(POLISH * left());
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
