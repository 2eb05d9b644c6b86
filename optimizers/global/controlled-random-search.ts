import { compareReplies } from '../local/compare.js';
import type { Method, Setup } from '../local/contract.js';
import { bestIndex, drawDistinct, firstGeneration, type Member } from './contract.js';

function worstIndex(members: readonly Member[]): number {
  let worst = 0;
  for (let i = 1; i < members.length; i++) {
    if (compareReplies(members[i].reply, members[worst].reply) > 0) worst = i;
  }
  return worst;
}

/**
 * Controlled random search with local mutation (CRS2-LM): reflects a random simplex that contains the best point, and
 * mutates around the best when that fails. Constraints by feasibility rules; a list coordinate is taken from one of
 * the simplex's corners.
 */
export function controlledRandomSearch(options: { readonly population?: number } = {}): Method {
  return {
    name: 'controlled-random-search',
    source: 'Kaelo & Ali, J. Optim. Theory Appl. 130, 253 (2006)',
    traits: {
      objectives: 'one',
      constraints: true,
      discrete: true,
      batch: false,
      gradient: false,
      stochastic: true,
    },
    *run(setup: Setup, random) {
      const { dimension, categories } = setup.space;
      const size = options.population ?? 10 * (dimension + 1);
      if (size < dimension + 2) {
        throw new Error(
          `controlled-random-search: got a population of ${size}; needs at least ${dimension + 2}`,
        );
      }
      const first = firstGeneration(setup, size, random);
      const replies = yield first;
      const members: Member[] = first.map((x, i) => ({ x, reply: replies[i] }));
      for (;;) {
        const best = bestIndex(members);
        const worst = worstIndex(members);
        const corners = [best, ...drawDistinct(dimension, size, best, random)].map((i) => members[i].x);
        const mirrored = corners[dimension];
        const reflected = mirrored.map((own, k) => {
          if (categories[k] > 0) return corners[random.int(dimension + 1)][k];
          const centroid = corners.slice(0, dimension).reduce((sum, x) => sum + x[k], 0) / dimension;
          return 2 * centroid - own;
        });
        const inside = reflected.every((u) => u >= 0 && u <= 1);
        if (inside) {
          const [reply] = yield [reflected];
          if (compareReplies(reply, members[worst].reply) < 0) {
            members[worst] = { x: reflected, reply };
            continue;
          }
        }
        const mutated = members[best].x.map((own, k) => {
          if (categories[k] > 0) return own;
          const weight = random.next();
          const other = inside ? reflected[k] : members[random.int(size)].x[k];
          return Math.min(Math.max((1 + weight) * own - weight * other, 0), 1);
        });
        const [reply] = yield [mutated];
        if (compareReplies(reply, members[worst].reply) < 0) members[worst] = { x: mutated, reply };
      }
    },
  };
}
