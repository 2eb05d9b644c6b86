import { exactQuantity } from '../../core/index.js';
import type { Goal } from '../../optimizers/index.js';
import { dimensionAt } from '../run/parameters.js';
import { figureLabel } from './labels.js';
import { thirdText } from './third.js';

function limitText({ figure, atMost, atLeast }: Goal['limits'][number]): string {
  const bound = (side: 'at_most' | 'at_least', value: number | null): string[] => {
    if (value === null) return [];
    const dimension = dimensionAt(`goal.limits.${figure}.${side}`);
    const text = dimension === null ? String(value) : exactQuantity(value, dimension);
    return [`${side.replace('_', ' ')} ${text}`];
  };
  return `${figure} ${[...bound('at_least', atLeast), ...bound('at_most', atMost)].join(' and ')}`;
}

/** What a search of the study would look for, one thing a line. */
export function goalLines(goal: Goal): string[] {
  const { from, to, points } = goal.front;
  const range =
    from === null && to === null
      ? 'over the reachable range'
      : `from ${from ?? 'the lowest'} to ${to ?? 'the highest'}`;
  const axis = thirdText(goal);
  return [
    `least ${figureLabel(`collected.${goal.impurity}`)}, at ${points} levels of ${figureLabel(`signal.${goal.brightness}`)}, ${range}`,
    ...(goal.atLeast === null ? [] : [`best design at a brightness of at least ${goal.atLeast}`]),
    ...(axis === null ? [] : [`third axis: ${axis.name} (${axis.figure}), in ${goal.third?.slices} slices`]),
    ...goal.limits.map((limit) => `limit: ${limitText(limit)}`),
  ];
}
