import type { Method, Reply, Setup, Steps, Trial } from './contract.js';
import { Expander, type Expansion, failed, rowOf, scaledReply } from './differences.js';

/** Lengths in units of the cube; tolerance relative to the objective. */
export interface MovingAsymptotesOptions {
  readonly differenceStep: number;
  /** First distance of the asymptotes. */
  readonly reach: number;
  readonly smallestStep: number;
  readonly tolerance: number;
}

export const MOVING_ASYMPTOTES_DEFAULTS: MovingAsymptotesOptions = {
  differenceStep: 1e-6,
  reach: 0.25,
  smallestStep: 1e-9,
  tolerance: 1e-12,
};

/** Factors of the asymptotes' distance where steps keep their sign or change it, and its limits. */
const WIDER = 1.2;
const CLOSER = 0.7;
const FARTHEST = 2;
const NEAREST = 1e-6;
/** Share of the distance to an asymptote that a step may take. */
const MOST = 0.9;
/** Weight of a violated constraint against the objective over its value at the start: bounds every multiplier. */
const PENALTY = 100000;
/** Added curvature: at the start, at the least, its growth in an inner and its decay in an outer iteration. */
const CURVATURE = { first: 1, least: 1e-5, growth: 10, decay: 0.1 };
const BISECTIONS = 50;
const ROUNDS = 50;
/** Values above their approximation by less than this, relatively, count as below. */
const SLACK = 1e-9;

/** The functions of the current point: value, slopes and added curvature of the objective and of each constraint. */
interface Approximation {
  readonly values: readonly number[];
  readonly slopes: readonly (readonly number[])[];
  readonly curvatures: readonly number[];
  /** Distance of the asymptotes, and the bounds of the step. */
  readonly sigma: readonly number[];
  readonly lower: readonly number[];
  readonly upper: readonly number[];
}

/** Value of approximation `row` after a step. */
function valueAt(a: Approximation, row: number, step: readonly number[]): number {
  return step.reduce((sum, d, k) => {
    const s = a.sigma[k];
    const bend = s * Math.abs(a.slopes[row][k]) + 0.5 * a.curvatures[row];
    return sum + (s * s * a.slopes[row][k] * d + bend * d * d) / (s * s - d * d);
  }, a.values[row]);
}

/** Minimises the separable sum of the objective and the weighted constraints in closed form, coordinate by coordinate. */
function minimiser(a: Approximation, multipliers: readonly number[]): number[] {
  return a.sigma.map((s, k) => {
    let [slope, bend] = [0, 0];
    for (let row = 0; row < a.values.length; row++) {
      const weight = row === 0 ? 1 : multipliers[row - 1];
      slope += weight * a.slopes[row][k];
      bend += weight * (s * Math.abs(a.slopes[row][k]) + 0.5 * a.curvatures[row]);
    }
    if (!(bend > 0)) return 0;
    const ratio = (slope * s * s) / bend;
    const root = Math.sqrt(Math.max(0, 1 - (ratio / s) ** 2));
    return Math.min(Math.max(-ratio / (1 + root), a.lower[k]), a.upper[k]);
  });
}

/** The step that minimises the approximation, by its dual: each multiplier within [0, penalty] by bisection, cyclically. */
function solve(a: Approximation): {
  readonly step: readonly number[];
  readonly multipliers: readonly number[];
} {
  const multipliers = a.values.slice(1).map(() => 0);
  let step = minimiser(a, multipliers);
  const residual = (j: number, multiplier: number) => {
    multipliers[j] = multiplier;
    step = minimiser(a, multipliers);
    return valueAt(a, j + 1, step);
  };
  const settle = (j: number) => {
    if (residual(j, 0) <= 0 || residual(j, PENALTY) >= 0) return;
    let [low, high] = [0, PENALTY];
    for (let i = 0; i < BISECTIONS && high - low > 1e-13 * high; i++) {
      const middle = (low + high) / 2;
      if (residual(j, middle) > 0) low = middle;
      else high = middle;
    }
    residual(j, high);
  };
  for (let round = 0; round < (multipliers.length > 1 ? ROUNDS : 1); round++) {
    const before = [...multipliers];
    for (let j = 0; j < multipliers.length; j++) settle(j);
    if (multipliers.every((m, j) => Math.abs(m - before[j]) <= 1e-9 * (1 + m))) break;
  }
  return { step, multipliers };
}

const merit = (row: readonly number[]) =>
  row.slice(1).reduce((sum, c) => sum + PENALTY * Math.max(0, c), row[0]);

/** Asymptotes move away where the last two steps agree and closer where they do not. */
function moved(sigma: readonly number[], last: readonly number[] | null, step: readonly number[]): number[] {
  return sigma.map((s, k) => {
    const trend = last === null ? 0 : last[k] * step[k];
    const factor = trend > 0 ? WIDER : trend < 0 ? CLOSER : 1;
    return Math.min(Math.max(factor * s, NEAREST), FARTHEST);
  });
}

function* iterate(
  start: Trial,
  free: readonly number[],
  options: MovingAsymptotesOptions,
  exact: boolean,
): Steps<void> {
  const [first] = yield [start];
  if (free.length === 0 || failed(first)) return;
  const scale = Math.abs(first.objectives[0]) || 1;
  const expander = new Expander(free, scale, options.differenceStep, exact);
  let x = start;
  let at: Expansion = yield* expander.at(start, scaledReply(first, scale));
  let sigma = free.map(() => options.reach);
  let curvatures = rowOf(at.reply).map(() => CURVATURE.first);
  let last: readonly number[] | null = null;
  for (;;) {
    const values = rowOf(at.reply);
    const lower = free.map((k, i) => Math.max(-MOST * sigma[i], -x[k]));
    const upper = free.map((k, i) => Math.min(MOST * sigma[i], 1 - x[k]));
    let step: readonly number[];
    let next: Trial;
    let reply: Reply;
    for (;;) {
      const model: Approximation = { values, slopes: at.gradients, curvatures, sigma, lower, upper };
      step = solve(model).step;
      const promised = values.map((_, row) => valueAt(model, row, step));
      const gain = merit(values) - merit(promised);
      if (!(gain > options.tolerance * (1 + Math.abs(values[0])))) return;
      if (Math.max(...step.map(Math.abs)) < options.smallestStep) return;
      const trial = [...x];
      free.forEach((k, i) => {
        trial[k] = Math.min(Math.max(x[k] + step[i], 0), 1);
      });
      next = trial;
      reply = scaledReply((yield [next])[0], scale);
      const found = rowOf(reply);
      const bowl = step.reduce((sum, d, i) => sum + (0.5 * d * d) / (sigma[i] * sigma[i] - d * d), 0);
      const excess = found.map((value, row) => value - promised[row]);
      const conservative = excess.every((e, row) => e <= SLACK * (1 + Math.abs(found[row])));
      // A step that is good enough is taken though an approximation was too low: that is only there to ensure descent.
      if (!failed(reply) && (conservative || merit(found) < merit(values) - ENOUGH * gain)) break;
      curvatures = curvatures.map((rho, row) =>
        excess[row] > 0 ? Math.min(CURVATURE.growth * rho, 1.1 * (rho + excess[row] / bowl)) : rho,
      );
      if (failed(reply)) curvatures = curvatures.map((rho) => CURVATURE.growth * rho);
    }
    at = yield* expander.at(next, reply);
    x = next;
    sigma = moved(sigma, last, step);
    last = step;
    curvatures = curvatures.map((rho) => Math.max(CURVATURE.decay * rho, CURVATURE.least));
  }
}

/** Share of the promised gain with which a step is taken at once. */
const ENOUGH = 0.1;

/**
 * Method of moving asymptotes in its conservative form: convex separable approximations that are solved by their dual,
 * made steeper until none lies below its function, with a penalty for constraints that cannot be met (Svanberg, Int. J.
 * Numer. Meth. Eng. 24, 359 (1987); SIAM J. Optim. 12, 555 (2002)). Derivatives exact or by differences. For smooth
 * problems, far from the optimum: it finds its way along curved valleys and off saddles, and converges linearly.
 */
export function movingAsymptotes(options: Partial<MovingAsymptotesOptions> = {}): Method {
  const all = { ...MOVING_ASYMPTOTES_DEFAULTS, ...options };
  return {
    name: 'moving-asymptotes',
    source: 'Svanberg, SIAM J. Optim. 12, 555 (2002)',
    traits: {
      objectives: 'one',
      constraints: true,
      discrete: false,
      batch: true,
      gradient: true,
      stochastic: false,
    },
    *run(setup: Setup) {
      const { dimension, categories } = setup.space;
      const start = setup.start[0] ?? new Array<number>(dimension).fill(0.5);
      const free = start.flatMap((_, i) => (categories[i] === 0 ? [i] : []));
      yield* iterate(start, free, all, setup.gradient ?? false);
    },
  };
}
