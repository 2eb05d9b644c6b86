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
/** Share of an island that is taken from the front. */
const FRONT_SHARE = 0.25;

/**
 * Where an island begins: with its own population and, in place of its last, the best few of its neighbour (ring
 * migration) and members of the front, which solves may have brought far beyond it.
 */
function starts(known: Knowledge, island: number, population: number): (readonly number[])[] {
  const { islands, front, problem } = known;
  const guests = islands.length > 1 ? islands[(island + 1) % islands.length].slice(0, MIGRANTS) : [];
  const count = Math.min(front.length, Math.floor(FRONT_SHARE * population));
  // Each island is given other members, spread over the whole front.
  const members = Array.from({ length: count }, (_, i) => {
    const place = (i + (island + 0.5) / islands.length) / count;
    return problem.unitOf(front[Math.floor(place * front.length)].values);
  });
  const others = [...guests, ...members];
  return [...islands[island].slice(0, Math.max(0, population - others.length)), ...others];
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
    const begun = known.islands.length === count;
    const floor = known.spec.goal.front.from ?? rangeOfInterest(known)?.from ?? null;
    const stage = epochs > 1 ? `${name}-${epoch + 1}` : name;
    const tasks = split(spend, count).map((size, i) =>
      known.task(stage, 'island', size, {
        population,
        start: begun ? starts(known, i, population) : [],
        floor,
      }),
    );
    const results = yield { name: stage, tasks };
    known.islands = results.map((result) => (result.summary as IslandSummary | null)?.population ?? []);
  }
}
