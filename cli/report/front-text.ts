import type { RunResult } from '../run/contract.js';
import { designTable } from './design-table.js';
import { explanationText } from './explanation-text.js';
import { symbolOf } from './labels.js';
import { duration, threeDigits } from './numbers.js';
import { slicesText } from './slices-text.js';
import type { Style } from './table.js';
import { boundText, thirdText } from './third.js';

/** The best design at a level within each bound of the third axis, tightest first. */
function bestBySlice(result: RunResult, level: number, style: Style): string {
  const { goal } = result.study;
  const points = result.front.filter(
    (point, i) =>
      point.level >= level &&
      result.front.findIndex((p) => p.slice === point.slice && p.level >= level) === i,
  );
  const bounds = points.map(({ slice }) => boundText(goal, slice));
  return designTable(result, points, style, [{ head: thirdText(goal)?.name ?? '', cells: bounds }]);
}

function accuracyLine(result: RunResult): string {
  const points = result.best === null ? result.front : [...result.front, result.best];
  const worst = Math.max(...points.map((p) => p.figures.accuracy.error_estimate));
  const methods = [...new Set(points.map((p) => p.figures.phonons.method))].join(', ');
  return `accuracy: largest estimated relative error ${worst.toExponential(1)}; phonons: ${methods}`;
}

/** Levels in words, the first few of many. */
export function levelList(levels: readonly number[]): string {
  const shown = levels.slice(0, 6).map((level) => threeDigits(level));
  return shown.join(', ') + (levels.length > 6 ? `, … (${levels.length} levels)` : '');
}

/** What the user reads at the end of a run: the front, the best design, what was out of reach, where the files are. */
export function frontText(result: RunResult, directory: string, style: Style): string {
  const { goal } = result.study;
  const { evaluations, hypervolume } = result.outcome;
  const { impurity, brightness, third } = hypervolume.reference;
  const axis = thirdText(goal);
  const corner = [
    `${threeDigits(impurity)} collected ${symbolOf(goal.impurity)}`,
    `${threeDigits(brightness)} signal ${symbolOf(goal.brightness)}`,
    ...(axis === null || third === null ? [] : [`${axis.value(third)} ${axis.name}`]),
  ].join(', ');
  const parts: string[] = [];
  if (result.front.length > 0)
    parts.push(
      goal.third === null ? designTable(result, result.front, style) : slicesText(result, style.color),
      '',
    );
  if (goal.atLeast !== null) {
    const name = `signal ${symbolOf(goal.brightness)} ≥ ${goal.atLeast}`;
    if (result.best === null) parts.push(`best design at ${name}: out of reach`, '');
    else if (goal.third === null)
      parts.push(`best design at ${name}:`, designTable(result, [result.best], style), '');
    else {
      const bests = bestBySlice(result, goal.atLeast, style);
      parts.push(`best design at ${name}, by the bound of ${thirdText(goal)?.name}:`, bests, '');
    }
  }
  if (result.outOfReach.length > 0)
    parts.push(`brightness levels out of reach: ${levelList(result.outOfReach)}`);
  if (result.explanation !== null) parts.push(explanationText(result.explanation, goal, style.color), '');
  if (result.front.length > 0) parts.push(accuracyLine(result));
  const { correction } = result.outcome;
  if (correction !== null) {
    parts.push(
      `phonons: searched by a second-order method, corrected by the exact one; ${correction.settled} of ${correction.levels} levels`,
      `  settled to a relative ${correction.tolerance}`,
    );
  }
  if (result.front.length > 0) {
    const what = axis === null ? 'area' : 'volume';
    parts.push(`hypervolume ${threeDigits(hypervolume.value)} (${what} between the front and the corner at`);
    parts.push(`  ${corner})`);
  }
  parts.push(
    `${evaluations} evaluations in ${duration(result.wall)}`,
    `files: ${directory}/front.csv, archive.csv, front.json, front.svg, designs/, ledger.jsonl`,
  );
  return parts.join('\n');
}
