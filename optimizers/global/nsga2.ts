import type { Stream } from '../../core/numerics/stream.js';
import { dominates } from '../front/archive.js';
import { crowding, nondominatedRanks } from '../front/sorting.js';
import { violation } from '../local/compare.js';
import type { Method, Reply, Setup, Trial } from '../local/contract.js';
import { firstGeneration, type Member } from './contract.js';
import { crossover, mutate } from './variation.js';

/** Sizes and distribution indices of the variation operators. */
export interface Nsga2Options {
  readonly population: number;
  readonly crossoverRate: number;
  readonly crossoverIndex: number;
  readonly mutationIndex: number;
  /** Chance per coordinate; null = 1 / number of coordinates. */
  readonly mutationRate: number | null;
}

export const NSGA2_DEFAULTS: Nsga2Options = {
  population: 100,
  crossoverRate: 0.9,
  crossoverIndex: 15,
  mutationIndex: 20,
  mutationRate: null,
};

/** Constrained domination: feasible before infeasible, less violation before more, else by objectives. */
function beats(a: Reply, b: Reply): boolean {
  const va = violation(a);
  const vb = violation(b);
  return va > 0 || vb > 0 ? va < vb : dominates(a.objectives, b.objectives);
}

interface Ranked extends Member {
  readonly rank: number;
  readonly distance: number;
}

/** The best `size` members by rank, then by crowding distance. */
export function select(members: readonly Member[], size: number): Ranked[] {
  const ranks = nondominatedRanks(members.length, (a, b) => beats(members[a].reply, members[b].reply));
  const chosen: Ranked[] = [];
  for (const [rank, indices] of ranks.entries()) {
    if (chosen.length >= size) break;
    const distances = crowding(indices.map((i) => members[i].reply.objectives));
    const ranked = indices.map((i, at) => ({ ...members[i], rank, distance: distances[at] }));
    if (chosen.length + ranked.length > size)
      ranked.sort((a, b) => (a.distance === b.distance ? 0 : b.distance - a.distance));
    chosen.push(...ranked.slice(0, size - chosen.length));
  }
  return chosen;
}

function tournament(members: readonly Ranked[], random: Stream): Trial {
  const a = members[random.int(members.length)];
  const b = members[random.int(members.length)];
  const better = a.rank !== b.rank ? a.rank < b.rank : a.distance >= b.distance;
  return better ? a.x : b.x;
}

function offspring(
  parents: readonly Ranked[],
  setup: Setup,
  options: Nsga2Options,
  random: Stream,
): number[][] {
  const { space } = setup;
  const rate = options.mutationRate ?? 1 / space.dimension;
  const children: number[][] = [];
  while (children.length < parents.length) {
    const a = tournament(parents, random);
    const b = tournament(parents, random);
    const pair =
      random.next() < options.crossoverRate
        ? crossover(a, b, space, options.crossoverIndex, random)
        : [[...a], [...b]];
    for (const child of pair) children.push(mutate(child, space, options.mutationIndex, rate, random));
  }
  return children.slice(0, parents.length);
}

/**
 * Non-dominated sorting genetic algorithm II with simulated binary crossover and polynomial mutation; constraints by
 * constrained domination, list coordinates as categories.
 */
export function nsga2(options: Partial<Nsga2Options> = {}): Method {
  const all = { ...NSGA2_DEFAULTS, ...options };
  if (!(all.population >= 4))
    throw new Error(`nsga2: got a population of ${all.population}; needs at least 4`);
  return {
    name: 'nsga2',
    source: 'Deb, Pratap, Agarwal & Meyarivan, IEEE Trans. Evol. Comput. 6, 182 (2002)',
    traits: {
      objectives: 'many',
      constraints: true,
      discrete: true,
      batch: true,
      gradient: false,
      stochastic: true,
    },
    *run(setup: Setup, random) {
      const first = firstGeneration(setup, all.population, random);
      const replies = yield first;
      let parents = select(
        first.map((x, i) => ({ x, reply: replies[i] })),
        all.population,
      );
      for (;;) {
        const children = offspring(parents, setup, all, random);
        const next = yield children;
        parents = select([...parents, ...children.map((x, i) => ({ x, reply: next[i] }))], all.population);
      }
    },
  };
}
