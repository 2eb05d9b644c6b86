import type { Method, Reply, Setup, Steps, Trial } from './contract.js';
import { Expander, type Expansion, failed, rowOf, scaledReply } from './differences.js';
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
  tolerance: 1e-12,
};

/** Shares of the predicted gain: below the first a step is refused, above the second the radius may grow. */
const ACCEPTABLE = 0.05;
const GOOD = 0.7;
const LEAST_PENALTY = 1;
const MOST_PENALTY = 1e6;

interface State {
  readonly x: Trial;
  readonly at: Expansion;
  readonly hessian: Matrix;
  /** The Hessian has seen a step, so its scale is known. */
  readonly scaled: boolean;
  readonly radius: number;
  readonly penalty: number;
}

const merit = (row: readonly number[], penalty: number) =>
  row.slice(1).reduce((sum, c) => sum + penalty * Math.max(0, c), row[0]);

const identity = (n: number, scale: number): number[][] =>
  Array.from({ length: n }, (_, i) => Array.from({ length: n }, (_, k) => (i === k ? scale : 0)));

const lagrangian = (gradients: Matrix, multipliers: readonly number[]) =>
  gradients[0].map((g, i) => multipliers.reduce((sum, m, j) => sum + m * gradients[j + 1][i], g));

const dot = (a: readonly number[], b: readonly number[]) =>
  a.reduce((sum, value, i) => sum + value * b[i], 0);

/** Where the step may go: the trust region cut with the cube. */
function boundsOf(state: State, free: readonly number[]) {
  return {
    lower: free.map((coordinate) => Math.max(-state.radius, -state.x[coordinate])),
    upper: free.map((coordinate) => Math.min(state.radius, 1 - state.x[coordinate])),
  };
}

interface ModelStep {
  readonly step: readonly number[];
  readonly multipliers: readonly number[];
  readonly predicted: number;
  readonly penalty: number;
}

/** Solves the model; raises the weight of the violation as long as that lessens the violation. */
function modelStep(state: State, free: readonly number[]): ModelStep {
  const { at, hessian } = state;
  const [value, ...values] = rowOf(at.reply);
  const [gradient, ...normals] = at.gradients;
  const bounds = boundsOf(state, free);
  const attempt = (penalty: number) => {
    const { step, multipliers } = solveQuadratic({ gradient, hessian, values, normals, ...bounds, penalty });
    const linear = values.map((c, j) => c + dot(normals[j], step));
    const curved = hessian.map((row) => dot(row, step));
    const model = [value + dot(gradient, step) + 0.5 * dot(step, curved), ...linear];
    const predicted = merit([value, ...values], penalty) - merit(model, penalty);
    const left = linear.reduce((sum, c) => sum + Math.max(0, c), 0);
    return { step, multipliers, predicted, penalty, left };
  };
  let current = attempt(state.penalty);
  while (current.left > 1e-9 && current.penalty < MOST_PENALTY) {
    const next = attempt(10 * current.penalty);
    if (!(next.left < 0.9 * current.left)) break;
    current = next;
  }
  return current;
}

/**
 * Second-order correction: the same model with the constraints as they were found at the end of the step, which takes
 * their curvature along (Nocedal & Wright, section 18.3). Without it the l1 merit refuses good steps along a curved
 * constraint.
 */
function correctedStep(
  state: State,
  free: readonly number[],
  model: ModelStep,
  found: Reply,
): readonly number[] {
  const [gradient, ...normals] = state.at.gradients;
  const values = found.constraints.map((c, j) => c - dot(normals[j], model.step));
  const { hessian } = state;
  const { penalty } = model;
  return solveQuadratic({ gradient, hessian, values, normals, ...boundsOf(state, free), penalty }).step;
}

function updated(
  state: State,
  moved: readonly number[],
  at: Expansion,
  multipliers: readonly number[],
): State {
  const y = lagrangian(at.gradients, multipliers).map(
    (g, i) => g - lagrangian(state.at.gradients, multipliers)[i],
  );
  const sy = dot(moved, y);
  const first = !state.scaled && sy > 0 ? identity(moved.length, dot(y, y) / sy) : state.hessian;
  return { ...state, at, hessian: dampedUpdate(first, moved, y), scaled: state.scaled || sy > 0 };
}

/** Feasibility first: a violated constraint outweighs the objective, or a start in the dark would stay there. */
function firstPenalty({ reply, gradients }: Expansion): number {
  const steepness = (row: readonly number[]) => Math.max(...row.map(Math.abs));
  const ratios = reply.constraints.map((c, j) =>
    c > 0 ? steepness(gradients[0]) / steepness(gradients[j + 1]) : 0,
  );
  const needed = 10 * Math.max(0, ...ratios.filter(Number.isFinite));
  return Math.min(Math.max(10 * LEAST_PENALTY, needed), MOST_PENALTY);
}

/** The iteration itself, on the free coordinates; ends when the model promises nothing or the radius is spent. */
function* iterate(start: Trial, free: readonly number[], options: SqpOptions, exact: boolean): Steps<void> {
  const [first] = yield [start];
  if (free.length === 0 || failed(first)) return;
  const scale = Math.abs(first.objectives[0]) || 1;
  const expander = new Expander(free, scale, options.differenceStep, exact);
  const begin = yield* expander.at(start, scaledReply(first, scale));
  const steepest = Math.max(...begin.gradients.flat().map(Math.abs));
  if (!(steepest > 0)) return;
  const hessian = identity(free.length, steepest / options.radius);
  let state: State = {
    x: start,
    at: begin,
    hessian,
    scaled: false,
    radius: options.radius,
    penalty: firstPenalty(begin),
  };
  const moved = (step: readonly number[]) => {
    const x = [...state.x];
    free.forEach((coordinate, i) => {
      x[coordinate] = Math.min(Math.max(x[coordinate] + step[i], 0), 1);
    });
    return x;
  };
  while (state.radius > options.smallestRadius) {
    const model = modelStep(state, free);
    const { predicted, penalty, multipliers } = model;
    if (!(predicted > options.tolerance * (1 + Math.abs(state.at.reply.objectives[0])))) return;
    const now = merit(rowOf(state.at.reply), penalty);
    const ratioOf = (reply: Reply) => (failed(reply) ? -1 : (now - merit(rowOf(reply), penalty)) / predicted);
    let { step } = model;
    let reply = scaledReply((yield [moved(step)])[0], scale);
    let ratio = ratioOf(reply);
    if (ratio < GOOD && !failed(reply) && reply.constraints.some((c) => c > 0)) {
      const corrected = correctedStep(state, free, model, reply);
      const second = scaledReply((yield [moved(corrected)])[0], scale);
      if (ratioOf(second) > ratio) {
        step = corrected;
        reply = second;
        ratio = ratioOf(second);
      }
    }
    const length = Math.max(...step.map(Math.abs));
    if (ratio < ACCEPTABLE) {
      state = { ...state, penalty, radius: 0.3 * length };
      continue;
    }
    const x = moved(step);
    const at = yield* expander.at(x, reply);
    const wider =
      length > 0.8 * state.radius ? Math.min(2 * state.radius, options.largestRadius) : state.radius;
    const radius = ratio > GOOD ? wider : ratio < 0.25 ? 0.5 * length : state.radius;
    // The weight follows the multipliers down as well, or an early large one would make every later step tiny.
    const weight = Math.max(LEAST_PENALTY, 0.5 * penalty, ...multipliers.map((m) => 2 * m));
    state = { ...updated(state, step, at, multipliers), x, radius, penalty: Math.min(weight, penalty) };
  }
}

/**
 * Sequential quadratic programming with an l1 merit function, a trust region in the maximum norm and damped BFGS
 * (Nocedal & Wright, *Numerical Optimization*, 2nd ed., chapter 18); derivatives by one-sided differences where the replies bring none. For smooth
 * problems with few constraints. The objective should enter linearly: with the logarithm of a probability the first
 * step runs towards zero light.
 */
export function sqp(options: Partial<SqpOptions> = {}): Method {
  const all = { ...SQP_DEFAULTS, ...options };
  return {
    name: 'sqp',
    source: 'Nocedal & Wright, Numerical Optimization, 2nd ed. (2006), chapter 18',
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
