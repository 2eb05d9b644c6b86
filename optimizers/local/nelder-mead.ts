// The package marks its UMD build as an ES module, so that importing it sets globalThis.fmin and exports nothing.
import 'fmin';
import type { Method, Reply, Setup, Trial } from './contract.js';
import { fold } from './fold.js';

interface Simplex {
  nelderMead(
    f: (z: readonly number[]) => number,
    start: number[],
    options: Readonly<Record<string, number>>,
  ): { readonly fx: number; readonly x: readonly number[] };
}

const { nelderMead } = (globalThis as unknown as { fmin: Simplex }).fmin;

/** Thrown out of the package's loop when the next value is not known yet. */
class Unknown extends Error {
  constructor(readonly trial: Trial) {
    super();
  }
}

/** Edge of the first simplex in the unit cube, and of the later ones relative to it. */
const EDGE = 0.1;
const RESTART_EDGES = [0.5, 0.2, 0.05, 0.01];
const TOLERANCE = 1e-12;

/**
 * One descent from `start` with simplex edge `edge`. The package calls its objective; to yield instead, the descent is
 * run anew for each value with the ones known so far, and stopped at the first unknown one.
 */
function* descend(start: Trial, free: readonly number[], edge: number) {
  const known: number[] = [];
  const trialAt = (z: readonly number[]) => {
    const x = [...start];
    free.forEach((coordinate, i) => {
      x[coordinate] = fold(start[coordinate] + edge * (z[i] - 1));
    });
    return x;
  };
  for (;;) {
    let calls = 0;
    const look = (z: readonly number[]) => {
      if (calls === known.length) throw new Unknown(trialAt(z));
      return known[calls++];
    };
    try {
      // Variables start at 1 and the first simplex doubles each. sigma = 1 skips the shrink step, which is broken
      // in this version; restarts make up for it.
      const ones = free.map(() => 1);
      const end = nelderMead(look, ones, { nonZeroDelta: 2, sigma: 1, minErrorDelta: TOLERANCE });
      return { x: trialAt(end.x), value: end.fx };
    } catch (stopped) {
      if (!(stopped instanceof Unknown)) throw stopped;
      const replies: readonly Reply[] = yield [stopped.trial];
      known.push(replies[0].objectives[0]);
    }
  }
}

/**
 * Downhill simplex (Nelder & Mead, Comput. J. 7, 308 (1965)) by the package fmin, with bounds by folding and restarts
 * from the best point with smaller simplices while they still gain. For smooth or rough functions of few variables.
 */
export const nelderMeadMethod: Method = {
  name: 'nelder-mead',
  source: 'Nelder & Mead, Comput. J. 7, 308 (1965)',
  traits: {
    objectives: 'one',
    constraints: false,
    discrete: false,
    batch: false,
    gradient: false,
    stochastic: false,
  },
  *run(setup: Setup) {
    const { dimension, categories } = setup.space;
    const start = setup.start[0] ?? new Array<number>(dimension).fill(0.5);
    const free = start.flatMap((_, i) => (categories[i] === 0 ? [i] : []));
    if (free.length === 0) {
      yield [start];
      return;
    }
    let best = yield* descend(start, free, EDGE);
    let failures = 0;
    for (let round = 0; failures < RESTART_EDGES.length; round++) {
      const edge = EDGE * RESTART_EDGES[round % RESTART_EDGES.length] * (round % 2 === 0 ? -1 : 1);
      const next = yield* descend(best.x, free, edge);
      const gain = best.value - next.value;
      failures = gain > 1e-10 * Math.abs(best.value) ? 0 : failures + 1;
      if (next.value < best.value) best = next;
    }
  },
};
