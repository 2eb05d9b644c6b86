import { figureAt } from '../run/columns.js';
import type { RunResult } from '../run/contract.js';
import { symbolOf } from './labels.js';
import { threeDigits } from './numbers.js';
import { tableText } from './table.js';
import { boundText, thirdText } from './third.js';

/** Impurity at each brightness level asked for, a column for each bound of the third axis, with the designs' numbers. */
export function slicesText(result: RunResult, color: boolean): string {
  const { goal, design } = result.study;
  const axis = thirdText(goal);
  if (axis === null) return '';
  const levels = [...new Set(result.outcome.front.map(({ level }) => level))];
  const bounds = [...new Set(result.outcome.front.map(({ slice }) => slice))];
  const judged = (design.drift?.quantile ?? null) === null ? '' : 'quantile.';
  const cell = (slice: number | null, level: number): string => {
    const found = result.front.find((point) => point.slice === slice && point.level >= level);
    if (found === undefined) return '–';
    const impurity = figureAt(found.figures, `${judged}collected.${goal.impurity}`);
    return `${threeDigits(impurity)} (${found.file.replace(/^.*\//, '').replace('.yaml', '')})`;
  };
  const rows = levels.map((level) => [threeDigits(level), ...bounds.map((slice) => cell(slice, level))]);
  return [
    `${symbolOf(goal.impurity)}, collected (number of the design), by the bound of ${axis.name}`,
    '',
    tableText(
      { head: [`${symbolOf(goal.brightness)}\nsignal ≥`, ...bounds.map((b) => boundText(goal, b))], rows },
      color,
    ),
  ].join('\n');
}
