import type { Figures } from '../../core/index.js';
import type { Goal, Limit, ThirdAxis } from './contract.js';
import { figureOf } from './limits.js';

interface AxisInfo {
  /** Path in the tree of figures; under drift its mean, also where goals are judged on a quantile. */
  readonly figure: string;
  /** `least`: minimised. */
  readonly sense: 'least' | 'most';
}

/** Every third axis that a goal may have. Energy and leakage cost optics; the mean is the count rate. */
export const thirdAxes: Readonly<Record<ThirdAxis, AxisInfo>> = {
  energy: { figure: 'pulse.energy_fj', sense: 'least' },
  leakage: { figure: 'collected.leakage', sense: 'least' },
  mean: { figure: 'collected.mean', sense: 'most' },
};

/** The third number of a goal as it is minimised (−⟨n⟩ for the mean); null where the figure does not exist. */
export function thirdNumber(figures: Figures, axis: ThirdAxis): number | null {
  const { figure, sense } = thirdAxes[axis];
  const value = figureOf(figures, figure);
  return value === null ? null : sense === 'least' ? value : 0 - value;
}

/** From the figure to what is minimised and back. */
export const turned = (value: number, axis: ThirdAxis): number =>
  thirdAxes[axis].sense === 'least' ? value : 0 - value;

/** The limit that a slice of the front stands for; `bound` in the unit of the figure. */
export function sliceLimit(axis: ThirdAxis, bound: number): Limit {
  const { figure, sense } = thirdAxes[axis];
  return { figure, atMost: sense === 'least' ? bound : null, atLeast: sense === 'most' ? bound : null };
}

/** The goal within a slice: two objectives, with the bound of the slice (null: none) among the limits. */
export function goalWithin(goal: Goal, bound: number | null): Goal {
  if (goal.third === null) return goal;
  const limit = bound === null ? [] : [sliceLimit(goal.third.axis, bound)];
  return { ...goal, third: null, limits: [...goal.limits, ...limit] };
}
