import { compareReplies } from '../local/compare.js';
import type { Method, Setup } from '../local/contract.js';
import { fold } from '../local/fold.js';
import { bestIndex, drawDistinct, firstGeneration, type Member } from './contract.js';

/**
 * Differential evolution, best/2 mixed with rand/1 by dithered weights, binomial crossover; constraints by feasibility
 * rules. A list coordinate is copied whole from one of the parents.
 */
export function differentialEvolution(
  options: { readonly population?: number; readonly crossover?: number } = {},
): Method {
  const crossover = options.crossover ?? 0.9;
  return {
    name: 'differential-evolution',
    source: 'Storn & Price, J. Global Optim. 11, 341 (1997)',
    traits: {
      objectives: 'one',
      constraints: true,
      discrete: true,
      batch: true,
      gradient: false,
      stochastic: true,
    },
    *run(setup: Setup, random) {
      const { dimension, categories } = setup.space;
      const size = options.population ?? Math.max(12, Math.min(10 * dimension, Math.ceil(setup.budget / 10)));
      if (size < 5) throw new Error(`differential-evolution: got a population of ${size}; needs at least 5`);
      const first = firstGeneration(setup, size, random);
      const replies = yield first;
      const members: Member[] = first.map((x, i) => ({ x, reply: replies[i] }));
      for (;;) {
        const best = members[bestIndex(members)].x;
        const trials = members.map(({ x }, i) => {
          const [a, b, c] = drawDistinct(3, size, i, random).map((index) => members[index].x);
          const weight = 0.4 + 0.5 * random.next();
          const base = random.next() < 0.3 ? best : a;
          const forced = random.int(dimension);
          return x.map((own, k) => {
            const copied = k !== forced && random.next() >= crossover;
            if (copied) return own;
            if (categories[k] > 0) return [a, b, c][random.int(3)][k];
            return fold(base[k] + weight * (b[k] - c[k]));
          });
        });
        const next = yield trials;
        trials.forEach((x, i) => {
          if (compareReplies(next[i], members[i].reply) <= 0) members[i] = { x, reply: next[i] };
        });
      }
    },
  };
}
