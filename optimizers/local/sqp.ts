import type { Method, Reply, Setup, Trial } from './contract.js';
import { differenceTrials, type Expansion, expand, failed, rowOf } from './differences.js';
import { dampedUpdate, type Matrix, solveQuadratic } from './qp.js';

/** Step of the differences and trust radii, in units of the cube; tolerance relative to the objective. */
export interface SqpOptions {
  readonly differenceStep: number;
  readonly radius: number;
  readonly largestRadius: number;
  readonly smallestRadius: number;
  readonly tolerance: number;
}

export const SQP_DEFAULTS: SqpOptions = {
  differenceStep: 1e-5,
  radius: 0.05,
  largestRadius: 0.3,
  smallestRadius: 1e-7,
  tolerance: 1e-9,
};

type Steps<T> = Generator<readonly Trial[], T, readonly Reply[]>;

interface State {
  readonly x: Trial;
  readonly at: Expansion;
  readonly hessian: Matrix;
  /** The Hessian has seen a step, so its scale is known. */
  readonly scaled: boolean;
  readonly radius: number;
  readonly penalty: number;
}

/** Divides the objective by its start value, so that tolerances and multipliers have a scale; the order stays. */
const scaledReply = (reply: Reply, scale: number): Reply =>
  failed(reply) ? reply : { ...reply, objectives: [reply.objectives[0] / scale] };

const merit = (row: readonly number[], penalty: number) =>
  row.slice(1).reduce((sum, c) => sum + penalty * Math.max(0, c), row[0]);

const identity = (n: number, scale: number): number[][] =>
  Array.from({ length: n }, (_, i) => Array.from({ length: n }, (_, k) => (i === k ? scale : 0)));

const lagrangian = (gradients: Matrix, multipliers: readonly number[]) =>
  gradients[0].map((g, i) => multipliers.reduce((sum, m, j) => sum + m * gradients[j + 1][i], g));

const dot = (a: readonly number[], b: readonly number[]) =>
  a.reduce((sum, value, i) => sum + value * b[i], 0);

/** Solves the model; raises the penalty where the multipliers touch it while the constraints could be met. */
function modelStep(state: State, free: readonly number[]) {
  const { x, at, hessian, radius } = state;
  const lower = free.map((coordinate) => Math.max(-radius, -x[coordinate]));
  const upper = free.map((coordinate) => Math.min(radius, 1 - x[coordinate]));
  const [value, ...values] = rowOf(at.reply);
  const [gradient, ...normals] = at.gradients;
  for (let penalty = state.penalty; ; penalty *= 10) {
    const { step, multipliers } = solveQuadratic({
      gradient,
      hessian,
      values,
      normals,
      lower,
      upper,
      penalty,
    });
    const linear = values.map((c, j) => c + dot(normals[j], step));
    const curved =
      0.5 *
      dot(
        step,
        hessian.map((row) => dot(row, step)),
      );
    const model = [value + dot(gradient, step) + curved, ...linear];
    const predicted = merit([value, ...values], penalty) - merit(model, penalty);
    // A larger weight helps only while the linear model still leaves a violation.
    const left = linear.reduce((sum, c) => sum + Math.max(0, c), 0);
    if (left <= 1e-9 || penalty >= 1e6) return { step, multipliers, predicted, penalty };
  }
}

function updated(state: State, moved: number[], at: Expansion, multipliers: readonly number[]): State {
  const y = lagrangian(at.gradients, multipliers).map(
    (g, i) => g - lagrangian(state.at.gradients, multipliers)[i],
  );
  const sy = dot(moved, y);
  const first = !state.scaled && sy > 0 ? identity(moved.length, dot(y, y) / sy) : state.hessian;
  return { ...state, at, hessian: dampedUpdate(first, moved, y), scaled: state.scaled || sy > 0 };
}

/** The iteration itself, on the free coordinates; ends when the model promises nothing or the radius is spent. */
function* iterate(start: Trial, free: readonly number[], options: SqpOptions): Steps<void> {
  const [first] = yield [start];
  if (free.length === 0 || failed(first)) return;
  const scale = Math.abs(first.objectives[0]) || 1;
  function* expansionAt(x: Trial, reply: Reply): Steps<Expansion> {
    const trials = differenceTrials(x, free, options.differenceStep);
    const replies = yield trials;
    const scaledReplies = replies.map((r) => scaledReply(r, scale));
    return expand(x, reply, free, trials, scaledReplies);
  }
  const begin = yield* expansionAt(start, scaledReply(first, scale));
  const steepest = Math.max(...begin.gradients.flat().map(Math.abs));
  if (!(steepest > 0)) return;
  const hessian = identity(free.length, steepest / options.radius);
  let state: State = { x: start, at: begin, hessian, scaled: false, radius: options.radius, penalty: 10 };
  while (state.radius > options.smallestRadius) {
    const { step, multipliers, predicted, penalty } = modelStep(state, free);
    if (!(predicted > options.tolerance * (1 + Math.abs(state.at.reply.objectives[0])))) return;
    const x = [...state.x];
    free.forEach((coordinate, i) => {
      x[coordinate] = Math.min(Math.max(x[coordinate] + step[i], 0), 1);
    });
    const length = Math.max(...step.map(Math.abs));
    const reply = scaledReply((yield [x])[0], scale);
    const gained = merit(rowOf(state.at.reply), penalty) - merit(rowOf(reply), penalty);
    const ratio = failed(reply) ? -1 : gained / predicted;
    if (ratio < 0.05) {
      state = { ...state, penalty, radius: Math.max(0.1, 0.5 * Math.min(1, 1 + ratio)) * length };
      continue;
    }
    const at = yield* expansionAt(x, reply);
    const wider =
      length > 0.8 * state.radius ? Math.min(2 * state.radius, options.largestRadius) : state.radius;
    const radius = ratio > 0.7 ? wider : ratio < 0.25 ? 0.5 * length : state.radius;
    state = { ...updated(state, step, at, multipliers), x, radius, penalty };
  }
}

/**
 * Sequential quadratic programming with an l1 merit function, a trust region in the maximum norm and damped BFGS
 * (Nocedal & Wright, *Numerical Optimization*, 2nd ed., chapter 18); derivatives by one-sided differences. For smooth
 * problems with few constraints. The objective should enter linearly: with the logarithm of a probability the first
 * step runs towards zero light.
 */
export function sqp(options: Partial<SqpOptions> = {}): Method {
  const all = { ...SQP_DEFAULTS, ...options };
  return {
    name: 'sqp',
    source: 'Nocedal & Wright, Numerical Optimization, 2nd ed. (2006), chapter 18',
    traits: { objectives: 'one', constraints: true, discrete: false, batch: true, stochastic: false },
    *run(setup: Setup) {
      const { dimension, categories } = setup.space;
      const start = setup.start[0] ?? new Array<number>(dimension).fill(0.5);
      const free = start.flatMap((_, i) => (categories[i] === 0 ? [i] : []));
      yield* iterate(start, free, all);
    },
  };
}
