import type { Reply, Trial } from '../local/contract.js';
import { optimizeInBatches } from '../local/session.js';
import { sqp } from '../local/sqp.js';
import { constraintCount } from '../problem/limits.js';
import type { Candidate, Problem } from '../problem/problem.js';
import type { Space } from '../problem/space.js';
import type { TaskContext, TaskRunner } from './contract.js';

/** Least impurity at a level by the exact phonon method, from where a cheaper one has it. */
export interface CorrectInput {
  readonly level: number;
  /** Point of the unit cube. */
  readonly start: readonly number[];
}

/** How it ended. */
export interface Correction {
  readonly level: number;
  /** Where it ended, in the unit cube. */
  readonly x: readonly number[];
  /**
   * Whether the corrected cheap method was solved to a tenth of `EXACT_TOLERANCE`, foretold the
   * exact figures of that design to `EXACT_TOLERANCE`, and the design reaches the level.
   */
  readonly settled: boolean;
  /** Largest relative miss of the last foretelling, impurity and brightness; null where none was tried. */
  readonly miss: number | null;
}

/** Relative error to which a corrected front is exact. */
export const EXACT_TOLERANCE = 1e-3;
const MOST_ROUNDS = 5;
/** First trust radius of a step, in units of the cube, and what each further round makes of it. */
const RADIUS = 0.1;
const SHRINK = 0.5;
/** Relative brightness to keep above the level: the least, and the most that a poor foretelling asks for. */
const MARGIN = { least: 2e-5, most: 1e-3 };
/** Relative gain in the last iteration of a solve that calls it ended. */
const IDLE = EXACT_TOLERANCE / 10;
/** Weight of a missing brightness and of violated limits against the relative impurity. */
const SHORTFALL = 100;

/** Evaluations of one round: the cheap and the exact method at its start, and a short solve. */
export const correctionRound = (space: Space): number => 2 + stepBudget(space);

/** A value with its differences along the coordinates that are no lists. */
const iteration = ({ categories }: Space): number => 1 + categories.filter((count) => count === 0).length;
const stepBudget = (space: Space): number => 5 * iteration(space);

/** What the exact method says more than the cheap one at the same design. */
interface Excess {
  readonly impurity: number;
  readonly brightness: number;
  readonly constraints: readonly number[];
}

interface Foretold {
  readonly x: Trial;
  readonly impurity: number;
  readonly brightness: number;
  /** The solve came to its own end, or its last iteration gained next to nothing. */
  readonly final: boolean;
}

function excessOf(exact: Candidate, cheap: Candidate): Excess {
  return {
    impurity: exact.impurity - cheap.impurity,
    brightness: exact.brightness - cheap.brightness,
    constraints: exact.constraints.map((c, i) => c - cheap.constraints[i]),
  };
}

/** A short solve on the cheap method plus the excess, from the design at which the excess was found. */
function step(
  { spec, problem, recorder, seed }: TaskContext,
  from: { readonly x: Trial; readonly cheap: Candidate; readonly excess: Excess },
  wanted: { readonly brightness: number; readonly radius: number; readonly budget: number },
): Foretold {
  const { excess, cheap } = from;
  const scale = Math.max(cheap.impurity + excess.impurity, 1e-12);
  const trials: (Omit<Foretold, 'final'> & { readonly merit: number })[] = [];
  const replyOf = (x: Trial, candidate: Candidate): Reply => {
    const impurity = candidate.impurity + excess.impurity;
    const brightness = candidate.brightness + excess.brightness;
    const constraints = candidate.constraints.map((c, i) => c + excess.constraints[i]);
    const missing = [wanted.brightness - brightness, ...constraints];
    const merit = impurity / scale + SHORTFALL * missing.reduce((sum, c) => sum + Math.max(0, c), 0);
    trials.push({ x, impurity, brightness, merit });
    return { objectives: [impurity], constraints: missing };
  };
  const setup = {
    space: problem.space,
    objectives: 1,
    constraints: 1 + constraintCount(spec.goal.limits),
    start: [from.x],
    seed,
    budget: wanted.budget,
  };
  const known = new Map([[from.x.join(), cheap]]);
  const method = sqp({ radius: wanted.radius, tolerance: IDLE });
  optimizeInBatches(method, setup, (asked) =>
    asked.map((x) => replyOf(x, known.get(x.join()) ?? recorder.evaluateOn(problem, x, false))),
  );
  const leastOf = (some: typeof trials) => some.reduce((a, b) => (b.merit < a.merit ? b : a));
  const best = leastOf(trials);
  const before = trials.slice(0, -iteration(problem.space));
  const idle = before.length > iteration(problem.space) && leastOf(before).merit - best.merit <= IDLE;
  return { ...best, final: idle || trials.length < wanted.budget };
}

const missOf = (exact: Candidate, foretold: Foretold): { impurity: number; brightness: number } => ({
  impurity: Math.abs(foretold.impurity / exact.impurity - 1),
  brightness: Math.abs(foretold.brightness / exact.brightness - 1),
});

/**
 * Corrects a cheap model by its difference from an exact one at the current design and solves again, until the corrected
 * model foretells the exact figures (model management with additive corrections: Alexandrov, Lewis, Gumbert, Green &
 * Newman, J. Aircraft 38, 1093 (2001), to zeroth order, which suffices where the difference changes slowly). Archives
 * exact figures only.
 */
export const correctTask: TaskRunner = (task, context): Correction => {
  const { level, start } = task.input as CorrectInput;
  const { problem, recorder } = context;
  const exact: Problem = problem.withExactPhonons();
  const left = (): number => task.budget - recorder.evaluations;
  let x: Trial = start;
  let foretold: Foretold | null = null;
  let margin = MARGIN.least;
  let miss: number | null = null;
  for (let round = 0; left() >= 1; round++) {
    const truth = recorder.evaluateOn(exact, x, true);
    if (!Number.isFinite(truth.impurity)) break;
    if (foretold !== null) {
      const by = missOf(truth, foretold);
      miss = Math.max(by.impurity, by.brightness);
      const reached = truth.brightness >= level && truth.violation === 0;
      if (miss <= EXACT_TOLERANCE && reached && foretold.final) return { level, x, settled: true, miss };
      margin = Math.min(MARGIN.most, Math.max(MARGIN.least, 2 * by.brightness));
    }
    // A value of the cheap method, two of a solve, and the exact one that judges it.
    if (round === MOST_ROUNDS || left() < 4) break;
    const cheap = recorder.evaluateOn(problem, x, false);
    if (!Number.isFinite(cheap.impurity)) break;
    const from = { x, cheap, excess: excessOf(truth, cheap) };
    const budget = Math.min(left() - 1, stepBudget(problem.space));
    const radius = RADIUS * SHRINK ** round;
    foretold = step(context, from, { brightness: level * (1 + margin), radius, budget });
    if (foretold.x.join() === x.join()) {
      const reached = truth.brightness >= level && truth.violation === 0;
      return { level, x, settled: reached && foretold.final, miss };
    }
    x = foretold.x;
  }
  return { level, x, settled: false, miss };
};
