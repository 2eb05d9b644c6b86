import type { Stream } from '../../core/numerics/stream.js';
import { compareReplies } from '../local/compare.js';
import type { Method, Reply, Setup, Steps } from '../local/contract.js';
import { fold } from '../local/fold.js';
import { bestIndex } from './contract.js';
import { symmetricEigen } from './eigen.js';

/** First step in units of the cube. */
const SIGMA = 0.25;
/** Sampling that has shrunk below this has converged. */
const SMALLEST = 1e-12;

/** Weights and learning rates of Hansen, arXiv:1604.00772 (2016), table 1, without negative weights. */
function ratesOf(n: number, lambda: number) {
  const mu = Math.floor(lambda / 2);
  const raw = Array.from({ length: mu }, (_, i) => Math.log((lambda + 1) / 2) - Math.log(i + 1));
  const sum = raw.reduce((a, b) => a + b, 0);
  const weights = raw.map((w) => w / sum);
  const muEff = 1 / weights.reduce((a, w) => a + w * w, 0);
  const cs = (muEff + 2) / (n + muEff + 5);
  const cc = (4 + muEff / n) / (n + 4 + (2 * muEff) / n);
  const c1 = 2 / ((n + 1.3) ** 2 + muEff);
  const cmu = Math.min(1 - c1, (2 * (muEff - 2 + 1 / muEff)) / ((n + 2) ** 2 + muEff));
  const damping = 1 + 2 * Math.max(0, Math.sqrt((muEff - 1) / (n + 1)) - 1) + cs;
  const length = Math.sqrt(n) * (1 - 1 / (4 * n) + 1 / (21 * n * n));
  return { weights, muEff, cs, cc, c1, cmu, damping, length };
}

const identity = (n: number): number[][] =>
  Array.from({ length: n }, (_, i) => Array.from({ length: n }, (_, k) => (i === k ? 1 : 0)));

/** One run until it has converged or stagnates; `first` is the mean on the free coordinates. */
function* descend(
  first: readonly number[],
  lambda: number,
  complete: (z: readonly number[]) => number[],
  random: Stream,
): Steps<void> {
  const n = first.length;
  const { weights, muEff, cs, cc, c1, cmu, damping, length } = ratesOf(n, lambda);
  let mean = [...first];
  let sigma = SIGMA;
  let covariance = identity(n);
  let [pathS, pathC] = [new Array<number>(n).fill(0), new Array<number>(n).fill(0)];
  let best: Reply | null = null;
  for (let generation = 1, stale = 0; sigma > SMALLEST && stale < 30 + (10 * n) / lambda; generation++) {
    const { values, vectors } = symmetricEigen(covariance);
    const scales = values.map((value) => Math.sqrt(Math.max(value, 1e-20)));
    const through = (z: readonly number[], power: 1 | -1) => {
      const turned = scales.map(
        (s, j) => vectors.reduce((sum, row, i) => sum + row[j] * z[i], 0) * (power === 1 ? s : 1 / s),
      );
      return vectors.map((row) => row.reduce((sum, v, j) => sum + v * turned[j], 0));
    };
    const steps = Array.from({ length: lambda }, () =>
      through(
        Array.from({ length: n }, () => random.normal()),
        1,
      ),
    );
    const replies = yield steps.map((y) => complete(mean.map((m, i) => fold(m + sigma * y[i]))));
    const order = steps.map((_, i) => i).sort((a, b) => compareReplies(replies[a], replies[b]) || a - b);
    const chosen = weights.map((w, i) => ({ w, y: steps[order[i]] }));
    const move = mean.map((_, i) => chosen.reduce((sum, { w, y }) => sum + w * y[i], 0));
    // A mean outside the cube would sample a mirror image: it is kept where its image is.
    mean = mean.map((m, i) => fold(m + sigma * move[i]));
    const white = through(move, -1);
    pathS = pathS.map((p, i) => (1 - cs) * p + Math.sqrt(cs * (2 - cs) * muEff) * white[i]);
    const norm = Math.hypot(...pathS);
    const steady = norm / Math.sqrt(1 - (1 - cs) ** (2 * generation)) < (1.4 + 2 / (n + 1)) * length;
    pathC = pathC.map((p, i) => (1 - cc) * p + (steady ? Math.sqrt(cc * (2 - cc) * muEff) * move[i] : 0));
    const keep = 1 - c1 - cmu + (steady ? 0 : c1 * cc * (2 - cc));
    covariance = covariance.map((row, i) =>
      row.map(
        (c, k) =>
          keep * c +
          c1 * pathC[i] * pathC[k] +
          cmu * chosen.reduce((sum, { w, y }) => sum + w * y[i] * y[k], 0),
      ),
    );
    sigma = Math.min(sigma * Math.exp((cs / damping) * (norm / length - 1)), 1);
    const top = replies[order[0]];
    const better = best === null || compareReplies(top, best) < -1e-12 * Math.abs(best.objectives[0]);
    stale = better ? 0 : stale + 1;
    if (better) best = top;
  }
}

/**
 * Evolution strategy with covariance matrix adaptation: rank-one and rank-μ update, cumulative step-size control;
 * restarts with twice the population when a run has converged (IPOP, Auger & Hansen, CEC 2005). Bounds by reflection,
 * constraints by feasibility rules in the ranking. List coordinates stay where the first start has them.
 */
export function cmaEs(options: { readonly population?: number } = {}): Method {
  return {
    name: 'cma-es',
    source: 'Hansen & Ostermeier, Evol. Comput. 9, 159 (2001); Hansen, arXiv:1604.00772 (2016)',
    traits: {
      objectives: 'one',
      constraints: true,
      discrete: false,
      batch: true,
      gradient: false,
      stochastic: true,
    },
    *run(setup: Setup, random) {
      const { dimension, categories } = setup.space;
      const given = setup.start[0] ?? new Array<number>(dimension).fill(0.5);
      const free = given.flatMap((_, i) => (categories[i] === 0 ? [i] : []));
      const [first] = yield [given];
      if (free.length === 0) return;
      const known = [{ x: given, reply: first }];
      const complete = (z: readonly number[]) => {
        const x = [...given];
        free.forEach((coordinate, i) => {
          x[coordinate] = z[i];
        });
        return x;
      };
      const least = options.population ?? 4 + Math.floor(3 * Math.log(free.length));
      for (let run = 0; ; run++) {
        const begin =
          run === 0
            ? free.map((coordinate) => known[bestIndex(known)].x[coordinate])
            : free.map(() => random.next());
        yield* descend(begin, Math.min(least * 2 ** run, 1000), complete, random);
      }
    },
  };
}
