import { formatQuantity } from '../../core/index.js';
import { type Goal, type ThirdAxis, thirdAxes } from '../../optimizers/index.js';
import { threeDigits } from './numbers.js';

interface AxisText {
  /** Whole name with basis. */
  readonly name: string;
  /** Unit of the column; empty for a pure number. */
  readonly unit: string;
  readonly value: (value: number) => string;
}

const AXES: Readonly<Record<ThirdAxis, AxisText>> = {
  energy: { name: 'pulse energy', unit: 'fJ', value: (v) => formatQuantity(v, 'pulseEnergy') },
  leakage: { name: 'leaked laser photons, collected', unit: 'photons per pulse', value: threeDigits },
  mean: { name: '⟨n⟩, collected', unit: 'photons per pulse', value: threeDigits },
};

/** How a third axis is called and written. */
export function thirdText(
  goal: Goal,
): (AxisText & { readonly figure: string; readonly relation: '≤' | '≥' }) | null {
  if (goal.third === null) return null;
  const { axis } = goal.third;
  const { figure, sense } = thirdAxes[axis];
  return { ...AXES[axis], figure, relation: sense === 'least' ? '≤' : '≥' };
}

/** The bound of a slice: `≤ 5.2 fJ`, or `no bound`. */
export function boundText(goal: Goal, bound: number | null): string {
  const axis = thirdText(goal);
  return bound === null || axis === null ? 'no bound' : `${axis.relation} ${axis.value(bound)}`;
}
