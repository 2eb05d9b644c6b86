import type { Knowledge, Plan } from './contract.js';
import { gridOf, samplePoints } from './enumerate.js';
import { explore, scatter } from './explore.js';
import { race, raceBudget } from './race.js';
import { round, TINY } from './round.js';
import { single } from './single.js';
import { slices } from './slices.js';

/** Share of the first round for populations, and where a race came before it. */
const EXPLORE = 0.2;
const EXPLORE_AFTER_RACE = 0.08;
/** Evaluations of the first round; each later one doubles. */
const FIRST_ROUND = 800;

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
  let exploring = contest > 0 ? EXPLORE_AFTER_RACE : EXPLORE;
  const tried = new Set<string>();
  for (let number = 1, size = FIRST_ROUND; known.left > 0; number++, size *= 2) {
    const before = known.spent;
    // The last round takes what would be too little for another one.
    const budget = known.left < 1.5 * size ? known.left : size;
    exploring = yield* round(known, { number, budget, exploring, tried });
    if (known.spent === before) return;
  }
}
