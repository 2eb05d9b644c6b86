import { type Stream, stream } from '../../core/numerics/stream.js';
import type { Reply, Trial } from '../local/contract.js';
import { movingAsymptotes } from '../local/moving-asymptotes.js';
import { optimizeInBatches } from '../local/session.js';
import { sqp } from '../local/sqp.js';
import { constraintCount } from '../problem/limits.js';
import type { Candidate } from '../problem/problem.js';
import type { TaskRunner } from './contract.js';

export type SolveMethod = 'moving-asymptotes' | 'sqp';

/** Least impurity at a brightness of at least `level`, from one start. */
export interface SolveInput {
  readonly level: number;
  /** Point of the unit cube. */
  readonly start: readonly number[];
  /** First distance of the asymptotes, or first trust radius, in units of the cube. */
  readonly radius: number;
  readonly method: SolveMethod;
  /** Whether exact derivatives are worth asking for. */
  readonly exact: boolean;
  /** The start is moved at random by up to this much along each coordinate: off symmetry, where a branch may fork. */
  readonly shake: number;
}

/** Where the solve ended; null when every candidate was infeasible. */
export interface Solution {
  readonly level: number;
  /** Where it began. */
  readonly start: readonly number[];
  readonly x: readonly number[];
  readonly impurity: number;
  readonly brightness: number;
  /** Sum of the violated limits of the goal. */
  readonly violation: number;
  /** Whether exact derivatives were had. */
  readonly exact: boolean;
}

/** Distance to keep from the limits of the goal: a design that misses one by rounding is lost. */
const MARGIN = 2e-6;

/** The same for the brightness, relative to its level. */
const BRIGHTNESS_MARGIN = 1e-5;

/** Weight of a missing brightness against the relative impurity, when the best of a solve is chosen. */
const SHORTFALL = 1e4;

/** Variables beyond which the quadratic subproblems of SQP cost more than they gain. */
const MANY = 12;

/** Relative gain in impurity that is not worth another iteration. */
const TOLERANCE = 5e-6;

function shaken(x: Trial, size: number, categories: readonly number[], random: Stream): number[] {
  return x.map((u, k) => {
    if (categories[k] > 0) return u;
    const moved = u + size * (2 * random.next() - 1);
    return Math.min(Math.max(moved, 0), 1);
  });
}

export const solveTask: TaskRunner = (task, { spec, problem, recorder, seed }): Solution | null => {
  const { level, start: given, radius, method: wanted, exact, shake } = task.input as SolveInput;
  const start = shaken(given, shake, problem.space.categories, stream(seed, 0));
  let best: Solution | null = null;
  let scale = 0;
  let had = false;
  const merit = (s: Solution) =>
    s.impurity / scale + SHORTFALL * (Math.max(0, level - s.brightness) + s.violation);
  const slopesAt = (x: Trial): Reply => {
    const rows = recorder.differentiate(x);
    had ||= rows !== null;
    // The brightness is a constraint from below.
    const gradients = rows?.map((row, i) => (i === 1 ? row.map((d) => -d) : row));
    return { objectives: [], constraints: [], ...(gradients ? { gradients } : {}) };
  };
  const replyOf = (x: Trial, candidate: Candidate): Reply => {
    const { impurity, brightness, constraints, violation } = candidate;
    if (Number.isFinite(impurity)) {
      scale ||= impurity || 1;
      const next = { level, start: given, x: [...x], impurity, brightness, violation, exact };
      if (best === null || merit(next) < merit(best)) best = next;
    }
    return {
      objectives: [impurity],
      constraints: [level * (1 + BRIGHTNESS_MARGIN) - brightness, ...constraints.map((c) => c + MARGIN)],
    };
  };
  const setup = {
    space: problem.space,
    objectives: 1,
    constraints: 1 + constraintCount(spec.goal.limits),
    start: [start],
    seed,
    budget: task.budget,
    gradient: exact && recorder.differentiable,
  };
  const method =
    wanted === 'moving-asymptotes' || problem.space.dimension > MANY
      ? movingAsymptotes({ reach: radius, tolerance: TOLERANCE })
      : sqp({ radius, tolerance: TOLERANCE });
  optimizeInBatches(method, setup, (trials, gradient) =>
    gradient
      ? trials.map(slopesAt)
      : recorder.evaluateMany(trials).map((candidate, i) => replyOf(trials[i], candidate)),
  );
  return best === null ? null : { ...(best as Solution), exact: had };
};
