import type { Stream } from '../../core/numerics/stream.js';
import { violation } from '../local/compare.js';
import type { Method, Reply, Setup } from '../local/contract.js';
import { firstGeneration, type Member } from './contract.js';
import { crossover, mutate } from './variation.js';

export interface MoeadOptions {
  /** Subproblems, about; with three objectives the nearest simplex lattice. */
  readonly population: number;
  readonly neighbours: number;
  /** Chance that parents come from the neighbourhood; else from the whole population. */
  readonly local: number;
  /** Most members that one child may replace. */
  readonly replacements: number;
  readonly crossoverIndex: number;
  readonly mutationIndex: number;
}

export const MOEAD_DEFAULTS: MoeadOptions = {
  population: 100,
  neighbours: 20,
  local: 0.9,
  replacements: 2,
  crossoverIndex: 15,
  mutationIndex: 20,
};

/** Evenly spread weight vectors: the simplex lattice of Das & Dennis, SIAM J. Optim. 8, 631 (1998). */
export function simplexLattice(objectives: number, count: number): number[][] {
  const lattice = (left: number, parts: number, total: number): number[][] => {
    if (parts === 1) return [[left / total]];
    return Array.from({ length: left + 1 }, (_, i) => i).flatMap((i) =>
      lattice(left - i, parts - 1, total).map((rest) => [i / total, ...rest]),
    );
  };
  const size = (h: number) => {
    let binomial = 1;
    for (let i = 1; i < objectives; i++) binomial = (binomial * (h + i)) / i;
    return binomial;
  };
  let divisions = 1;
  while (size(divisions + 1) <= count) divisions++;
  return lattice(divisions, objectives, divisions);
}

interface Scale {
  readonly ideal: number[];
  readonly nadir: number[];
}

/** Tchebycheff distance on objectives scaled to the range of the population. */
function tchebycheff({ objectives }: Reply, weights: readonly number[], { ideal, nadir }: Scale): number {
  return weights.reduce((worst, w, k) => {
    const span = nadir[k] - ideal[k];
    const distance = span > 0 ? (objectives[k] - ideal[k]) / span : objectives[k] - ideal[k];
    return Math.max(worst, Math.max(w, 1e-4) * distance);
  }, 0);
}

/** Share of the first generation's range below which an objective's range is not taken to have shrunk. */
const LEAST_RANGE = 0.2;

/** The worst of each objective over feasible members, or over all where there are none. */
function worstOf(members: readonly Member[], ideal: readonly number[]): number[] {
  const feasible = members.filter(({ reply }) => violation(reply) === 0);
  const from = feasible.length > 1 ? feasible : members;
  return ideal.map((low, k) => Math.max(low, ...from.map(({ reply }) => reply.objectives[k])));
}

function neighbourhoods(weights: readonly (readonly number[])[], count: number): number[][] {
  return weights.map((own) => {
    const distance = (i: number) => weights[i].reduce((sum, w, k) => sum + (w - own[k]) ** 2, 0);
    const order = weights.map((_, i) => i).sort((a, b) => distance(a) - distance(b) || a - b);
    return order.slice(0, Math.min(count, weights.length));
  });
}

function shuffled(items: readonly number[], random: Stream): number[] {
  const out = [...items];
  for (let i = out.length - 1; i > 0; i--) {
    const k = random.int(i + 1);
    [out[i], out[k]] = [out[k], out[i]];
  }
  return out;
}

/** A child by simulated binary crossover of two members of a pool, then polynomial mutation. */
function childOf(
  pool: readonly number[],
  members: readonly Member[],
  { space }: Setup,
  options: MoeadOptions,
  random: Stream,
): number[] {
  const [a, b] = [pool[random.int(pool.length)], pool[random.int(pool.length)]].map((i) => members[i].x);
  const [first, second] = crossover(a, b, space, options.crossoverIndex, random);
  const child = random.next() < 0.5 ? first : second;
  return mutate(child, space, options.mutationIndex, 1 / space.dimension, random);
}

/**
 * Multi-objective evolutionary algorithm based on decomposition: one Tchebycheff subproblem per weight vector, children
 * by simulated binary crossover within neighbourhoods; parents from everywhere now and then, and few replacements per
 * child, keep it diverse (Li & Zhang, IEEE Trans. Evol. Comput. 13, 284 (2009)). Constraints by feasibility rules, list
 * coordinates as categories.
 */
export function moead(options: Partial<MoeadOptions> = {}): Method {
  const all = { ...MOEAD_DEFAULTS, ...options };
  if (!(all.population >= 4))
    throw new Error(`moead: got a population of ${all.population}; needs at least 4`);
  return {
    name: 'moead',
    source: 'Zhang & Li, IEEE Trans. Evol. Comput. 11, 712 (2007)',
    traits: {
      objectives: 'many',
      constraints: true,
      discrete: true,
      batch: false,
      gradient: false,
      stochastic: true,
    },
    *run(setup: Setup, random) {
      const weights = simplexLattice(setup.objectives, all.population);
      const near = neighbourhoods(weights, all.neighbours);
      const first = firstGeneration(setup, weights.length, random);
      const replies = yield first;
      const members: Member[] = first.map((x, i) => ({ x, reply: replies[i] }));
      const everyone = weights.map((_, i) => i);
      const ideal = members[0].reply.objectives.map((_, k) =>
        Math.min(...members.map(({ reply }) => reply.objectives[k])),
      );
      const ranges = worstOf(members, ideal).map((high, k) => high - ideal[k]);
      for (;;) {
        // A population that has collapsed to a corner of the front would otherwise blow that corner up and stay there.
        const nadir = worstOf(members, ideal).map((high, k) =>
          Math.max(high, ideal[k] + LEAST_RANGE * ranges[k]),
        );
        const scale = { ideal, nadir };
        for (const own of shuffled(everyone, random)) {
          const pool = random.next() < all.local ? near[own] : everyone;
          const child = childOf(pool, members, setup, all, random);
          const [reply] = yield [child];
          if (violation(reply) === 0 || members.every((m) => violation(m.reply) > 0))
            reply.objectives.forEach((value, k) => {
              ideal[k] = Math.min(ideal[k], value);
            });
          let replaced = 0;
          for (const i of shuffled(pool, random)) {
            if (replaced >= all.replacements) break;
            if (!beats(reply, members[i].reply, weights[i], scale)) continue;
            members[i] = { x: child, reply };
            replaced++;
          }
        }
      }
    },
  };
}

function beats(a: Reply, b: Reply, weights: readonly number[], scale: Scale): boolean {
  const [va, vb] = [violation(a), violation(b)];
  if (va > 0 || vb > 0) return va < vb;
  return tchebycheff(a, weights, scale) <= tchebycheff(b, weights, scale);
}
