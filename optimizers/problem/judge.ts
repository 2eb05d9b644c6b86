import type { Figures } from '../../core/index.js';
import type { Goal } from './contract.js';
import { constraintCount, limitStates } from './limits.js';
import { thirdNumber } from './third.js';

/** The numbers of the goal. Impurity is minimised, brightness maximised. */
export interface Judgement {
  /** +∞ when the candidate is infeasible. */
  readonly impurity: number;
  /** 0 when the candidate is infeasible. */
  readonly brightness: number;
  /** Third number as it is minimised, see `thirdNumber`; null for a goal of two. +∞ when the candidate is infeasible. */
  readonly third: number | null;
}

/** What a search minimises: impurity, −brightness and, where there is one, the third number. */
export function objectivesOf({ impurity, brightness, third }: Judgement): number[] {
  return third === null ? [impurity, -brightness] : [impurity, -brightness, third];
}

/** A judgement with the limits of the goal as constraints. */
export interface Verdict extends Judgement {
  /** One per bound, each met when ≤ 0; see `limitStates`. */
  readonly constraints: readonly number[];
  /** Sum of the violated ones; 0 when every limit is met, +∞ when the candidate is no design. */
  readonly violation: number;
}

/** No design: compares worse than every real one. */
export function infeasible(goal: Goal): Verdict {
  const constraints = new Array<number>(constraintCount(goal.limits)).fill(Number.POSITIVE_INFINITY);
  const violation = Number.POSITIVE_INFINITY;
  const third = goal.third === null ? null : Number.POSITIVE_INFINITY;
  return { impurity: Number.POSITIVE_INFINITY, brightness: 0, third, constraints, violation };
}

/** Above this estimated error (`accuracy.error_estimate`) the figures are no basis for a decision. */
const USELESS_ERROR = 1e-2;

/** Probabilities may leave [0, 1] by rounding only. */
const ROUNDING = 1e-9;

/**
 * The numbers of the goal: impurity of `collected`, brightness of `signal`; null where one is null, NaN, infinite or
 * unphysical. Means over drift, or the quantiles where the design asks for them.
 */
function numbersOf(figures: Figures, goal: Goal): Judgement | null {
  const { signal, collected } = figures.quantile ?? figures;
  const impurity = collected[goal.impurity];
  const brightness = signal[goal.brightness];
  if (impurity === null || brightness === null) return null;
  if (!Number.isFinite(impurity) || !Number.isFinite(brightness)) return null;
  if (impurity < 0 || brightness < 0) return null;
  if (goal.impurity === 'multiphoton' && impurity > 1 + ROUNDING) return null;
  if (goal.brightness !== 'mean' && brightness > 1 + ROUNDING) return null;
  const third = goal.third && thirdNumber(figures, goal.third.axis);
  return goal.third !== null && third === null ? null : { impurity, brightness, third };
}

/**
 * Judges figures by a goal. A number of the goal that is no number, flags of the phonon method, or a useless error
 * estimate make the candidate infeasible: a search would otherwise walk straight into the flaw.
 */
export function judge(figures: Figures, goal: Goal): Verdict {
  const numbers = numbersOf(figures, goal);
  if (numbers === null || figures.phonons.flags.length > 0) return infeasible(goal);
  if (!(figures.accuracy.error_estimate <= USELESS_ERROR)) return infeasible(goal);
  const constraints = limitStates(figures, goal.limits).map(({ constraint }) => constraint);
  return { ...numbers, constraints, violation: constraints.reduce((sum, c) => sum + Math.max(0, c), 0) };
}
