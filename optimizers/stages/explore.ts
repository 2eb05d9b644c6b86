import { stream } from '../../core/numerics/stream.js';
import { latinHypercube } from '../global/contract.js';
import type { IslandSummary } from '../tasks/island.js';
import { type Knowledge, type Plan, rangeOfInterest, split } from './contract.js';
import { samplePoints } from './enumerate.js';

/** Evaluations of an island between two migrations, at most. */
const EPOCH = 200;
const ISLANDS = 4;
/** Evaluations that make a further island worth while. */
const ISLAND_WORTH = 60;
const MIGRANTS = 3;

/** Ring migration: each island begins with its own population and the best few of its neighbour in place of its last. */
function migrate(islands: Knowledge['islands'], population: number): (readonly (readonly number[])[])[] {
  return islands.map((own, i) => {
    if (islands.length === 1) return own;
    const guests = islands[(i + 1) % islands.length].slice(0, MIGRANTS);
    return [...own.slice(0, Math.max(0, population - guests.length)), ...guests];
  });
}

/** A budget too small for a population: evenly spread points. */
export function* scatter(known: Knowledge, name: string, count: number): Plan {
  const points = latinHypercube(known.problem.space, count, stream(known.spec.search.seed, known.spent));
  yield* samplePoints(known, name, points);
}

/** Independent NSGA-II islands that exchange members between epochs. Spends at most `budget`. */
export function* explore(known: Knowledge, name: string, budget: number): Plan {
  const count = Math.min(ISLANDS, Math.max(1, Math.floor(budget / ISLAND_WORTH)));
  const share = budget / count;
  const population = Math.min(40, Math.max(4, 4 * Math.floor(share / 24)));
  const epochs = Math.ceil(share / EPOCH);
  for (const [epoch, spend] of split(budget, epochs).entries()) {
    const starts = known.islands.length === count ? migrate(known.islands, population) : [];
    const floor = known.spec.goal.front.from ?? rangeOfInterest(known)?.from ?? null;
    const stage = epochs > 1 ? `${name}-${epoch + 1}` : name;
    const tasks = split(spend, count).map((size, i) =>
      known.task(stage, 'island', size, { population, start: starts[i] ?? [], floor }),
    );
    const results = yield { name: stage, tasks };
    known.islands = results.map((result) => (result.summary as IslandSummary | null)?.population ?? []);
  }
}
