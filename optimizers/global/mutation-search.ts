import { createRequire } from 'node:module';
import type { Stream } from '../../core/numerics/stream.js';
import { compareReplies } from '../local/compare.js';
import type { Method, Setup } from '../local/contract.js';
import { binCenter, binOf } from '../problem/space.js';
import type { Member } from './contract.js';

type Dimension = object;

interface MutationOptimizer {
  /** Evaluated points and values; the package mutates the best of them. */
  X: number[][];
  Y: number[];
  n_random_starts_: number;
  ask(): number[];
}

interface Package {
  Real(low: number, high: number): Dimension;
  Categorical(categories: readonly number[]): Dimension;
  OMGOptimizer(dimensions: readonly Dimension[], starts: number, rate: number): MutationOptimizer;
}

// CommonJS without types; loaded on first use, since it leaves variables on the global object.
const load = (): Package => createRequire(import.meta.url)('optimization-js') as Package;

/** The package draws from Math.random: it is swapped for the seeded stream only inside this synchronous call. */
function withStream<T>(random: Stream, act: () => T): T {
  const original = Math.random;
  Math.random = () => random.next();
  try {
    return act();
  } finally {
    Math.random = original;
  }
}

const RANDOM_STARTS = 13;
/** Chance that a mutation happens at all in a coordinate, and at each of the package's scales 2^−16 … 2. */
const MUTATION_RATE = 0.3;

/**
 * Random mutation of the best point at scales from 2⁻¹⁶ to the whole range: the mutation-only genetic search of the
 * package optimization-js. Constraints by feasibility rules.
 */
export const mutationSearch: Method = {
  name: 'mutation-search',
  source:
    'optimization-js, OMGOptimizer; an evolution strategy (1+1) after Rechenberg, Evolutionsstrategie (1973)',
  traits: {
    objectives: 'one',
    constraints: true,
    discrete: true,
    batch: false,
    gradient: false,
    stochastic: true,
  },
  *run(setup: Setup, random) {
    const { categories } = setup.space;
    const { Real, Categorical, OMGOptimizer } = load();
    const dimensions = categories.map((count) =>
      count > 0 ? Categorical(Array.from({ length: count }, (_, i) => binCenter(i, count))) : Real(0, 1),
    );
    const optimizer = OMGOptimizer(dimensions, RANDOM_STARTS, MUTATION_RATE);
    let best: Member | null = null;
    const starts = setup.start.map((x) =>
      x.map((u, k) => (categories[k] > 0 ? binCenter(binOf(u, categories[k]), categories[k]) : u)),
    );
    for (let told = 0; ; told++) {
      optimizer.n_random_starts_ = Math.max(0, RANDOM_STARTS - told);
      const x: readonly number[] = starts[told] ?? withStream(random, () => optimizer.ask());
      const [reply] = yield [x];
      if (best === null || compareReplies(reply, best.reply) < 0) best = { x, reply };
      // Only the best point matters to the package, so it is told no other; its value is never compared.
      optimizer.X = [[...best.x]];
      optimizer.Y = [0];
    }
  },
};
