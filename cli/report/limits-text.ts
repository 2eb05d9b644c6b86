import { exactQuantity, formatQuantity } from '../../core/index.js';
import { type EvaluatedPoint, type LimitState, limitStates } from '../../optimizers/index.js';
import { dimensionAt, readable } from '../run/parameters.js';
import type { Study } from '../study/index.js';
import { threeDigits } from './numbers.js';

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

/** By how much a limit is missed: in percent, or as a multiple where that is large. */
function excessText({ value, bound, side }: LimitState): string {
  if (value === null || value === 0 || bound === 0) return '';
  const ratio = side === 'atMost' ? value / bound : bound / value;
  if (!(ratio > 1) || !Number.isFinite(ratio)) return '';
  const far = ratio < 2 ? `${threeDigits(100 * (ratio - 1))} %` : `a factor of ${threeDigits(ratio)}`;
  return ` (missed by ${far})`;
}

/** The limits that a point misses, the least missed first. */
function missed({ figures }: EvaluatedPoint, study: Study): LimitState[] {
  return limitStates(figures, study.goal.limits)
    .filter(({ constraint }) => constraint > 0)
    .sort((a, b) => a.constraint - b.constraint);
}

/** The limits that a point misses, the worst first, as a user reads them. */
export function missedLimits(point: EvaluatedPoint, study: Study): string[] {
  return missed(point, study)
    .reverse()
    .map((state) => {
      const side = state.side === 'atMost' ? 'at most' : 'at least';
      return `${pathOf(state)}: ${state.limit.figure} is ${valueText(state)}, allowed is ${side} ${boundText(state)}${excessText(state)}`;
    });
}

/** Why a study is infeasible: the design that comes nearest to its limits, and what it misses. */
export function infeasibleText(nearest: EvaluatedPoint, study: Study, evaluations: number): string {
  const all = missed(nearest, study);
  const values = study.parameters.map((p, i) => `${p.path} = ${readable(nearest.values[i], p.path)}`);
  return [
    `infeasible: none of ${evaluations} evaluations meets every limit of goal.limits`,
    ...missedLimits(nearest, study).map((line) => `  ${line}`),
    ...(all.length > 1 ? [`  least violated: ${pathOf(all[0])}`] : []),
    `  at the design nearest to them: ${values.length > 0 ? values.join(', ') : 'the only one of the study'}`,
  ].join('\n');
}
