import { exactQuantity, formatQuantity } from '../../core/index.js';
import { type EvaluatedPoint, type LimitState, limitStates } from '../../optimizers/index.js';
import { dimensionAt, readable } from '../run/parameters.js';
import type { Study } from '../study/index.js';

const pathOf = ({ limit, side }: LimitState): string =>
  `goal.limits.${limit.figure}.${side === 'atMost' ? 'at_most' : 'at_least'}`;

function valueText(state: LimitState): string {
  const dimension = dimensionAt(pathOf(state));
  if (state.value === null) return 'does not exist';
  return dimension === null ? String(state.value) : formatQuantity(state.value, dimension);
}

function boundText(state: LimitState): string {
  const dimension = dimensionAt(pathOf(state));
  return dimension === null ? String(state.bound) : exactQuantity(state.bound, dimension);
}

/** The limits that a point misses, the worst first, as a user reads them. */
export function missedLimits({ figures }: EvaluatedPoint, study: Study): string[] {
  return limitStates(figures, study.goal.limits)
    .filter(({ constraint }) => constraint > 0)
    .sort((a, b) => b.constraint - a.constraint)
    .map((state) => {
      const side = state.side === 'atMost' ? 'at most' : 'at least';
      return `${pathOf(state)}: ${state.limit.figure} is ${valueText(state)}, allowed is ${side} ${boundText(state)}`;
    });
}

/** Why a study is infeasible: the design that comes nearest to its limits, and what it misses. */
export function infeasibleText(nearest: EvaluatedPoint, study: Study, evaluations: number): string {
  const values = study.parameters.map((p, i) => `${p.path} = ${readable(nearest.values[i], p.path)}`);
  return [
    `infeasible: none of ${evaluations} evaluations meets every limit of goal.limits`,
    ...missedLimits(nearest, study).map((line) => `  ${line}`),
    `  at the design nearest to them: ${values.length > 0 ? values.join(', ') : 'the only one of the study'}`,
  ].join('\n');
}
