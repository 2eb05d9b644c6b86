import type { Figures } from '../../core/index.js';
import type { Goal } from './contract.js';

/** The two numbers of the goal. Impurity is minimised, brightness maximised. */
export interface Judgement {
  /** +∞ when the candidate is infeasible. */
  readonly impurity: number;
  /** 0 when the candidate is infeasible. */
  readonly brightness: number;
}

/** No design: compares worse than every real one. */
export const INFEASIBLE: Judgement = { impurity: Number.POSITIVE_INFINITY, brightness: 0 };

/** Above this estimated error (`accuracy.error_estimate`) the figures are no basis for a decision. */
const USELESS_ERROR = 1e-2;

/** Probabilities may leave [0, 1] by rounding only. */
const ROUNDING = 1e-9;

/**
 * Reads the goal's figures: impurity from `collected`, brightness from `signal`. A figure that is null, NaN, infinite or
 * unphysical, one with flags of its phonon method, or one whose error estimate is useless makes the candidate
 * infeasible: a search would otherwise walk straight into the flaw.
 */
export function judge(figures: Figures, goal: Goal): Judgement {
  const impurity = figures.collected[goal.impurity];
  const brightness = figures.signal[goal.brightness];
  if (impurity === null || brightness === null) return INFEASIBLE;
  if (!Number.isFinite(impurity) || !Number.isFinite(brightness)) return INFEASIBLE;
  if (figures.phonons.flags.length > 0) return INFEASIBLE;
  if (!(figures.accuracy.error_estimate <= USELESS_ERROR)) return INFEASIBLE;
  if (impurity < 0 || brightness < 0) return INFEASIBLE;
  if (goal.impurity === 'multiphoton' && impurity > 1 + ROUNDING) return INFEASIBLE;
  if (goal.brightness !== 'mean' && brightness > 1 + ROUNDING) return INFEASIBLE;
  return { impurity, brightness };
}
