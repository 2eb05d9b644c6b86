import { formatQuantity } from '../../core/index.js';
import { applyParameters, type FreeParameter } from '../../optimizers/index.js';
import { figureAt } from '../run/columns.js';
import type { FrontDesign, RunResult } from '../run/contract.js';
import { readable } from '../run/parameters.js';
import { biasOf } from '../study/index.js';
import { explanationText } from './explanation-text.js';
import { symbolOf } from './labels.js';
import { duration, threeDigits } from './numbers.js';
import { slicesText } from './slices-text.js';
import { tableText } from './table.js';
import { boundText, thirdText } from './third.js';

const fileName = (point: FrontDesign): string => point.file.replace(/^.*\//, '').replace('.yaml', '');

/** `pulse.tones.0.fwhm` → `tone 0\nfwhm`, `collection.filter.center` → `filter\ncenter`. */
function parameterHead(path: string): string {
  const parts = path.split('.');
  const name = parts[parts.length - 1];
  const owner = parts[1] === 'tones' ? `tone ${parts[2]}` : parts[parts.length - 2];
  return `${owner}\n${name}`;
}

/** A value that is zero on the scale of its range is shown as zero: the search leaves it at some 1e-6 of the range. */
function cleaned(value: number, parameter: FreeParameter): number {
  if (parameter.kind === 'list') return value;
  return Math.abs(value) < 1e-3 * (parameter.to - parameter.from) && parameter.from < 0 ? 0 : value;
}

/** @param slices the bound of each point as a column of its own */
function table(
  result: RunResult,
  points: readonly FrontDesign[],
  color: boolean,
  slices: readonly string[] = [],
): string {
  const { goal, parameters } = result.study;
  const axis = thirdText(goal);
  const others = ['multiphoton', 'g2'].filter((name) => name !== goal.impurity);
  // What the goal was judged on comes first.
  const judged = (result.study.design.drift?.quantile ?? null) === null ? '' : 'quantile.';
  const figures = [
    `${judged}signal.${goal.brightness}`,
    `${judged}collected.${goal.impurity}`,
    ...others.map((name) => `collected.${name}`),
    ...(axis === null ? [] : [axis.figure]),
  ];
  const { study } = result;
  const bias = ({ values }: FrontDesign): string[] => {
    const voltage = biasOf(study, applyParameters(study, values));
    return voltage === null ? [] : [formatQuantity(voltage, 'voltage', 4)];
  };
  const head = (path: string) => {
    if (path === 'pulse.energy_fj') return 'pulse\nenergy';
    const parts = path.split('.');
    const basis = parts[parts.length - 2];
    return `${symbolOf(parts[parts.length - 1])}\n${parts.length > 2 ? `${basis}, quantile` : basis}`;
  };
  return tableText(
    {
      head: [
        ...(slices.length > 0 ? [axis?.name ?? ''] : []),
        'design',
        'level',
        ...figures.map(head),
        ...parameters.map((p) => parameterHead(p.path)),
        ...(study.tuning === null ? [] : ['bias\nto set']),
      ],
      rows: points.map((point, k) => [
        ...slices.slice(k, k + 1),
        fileName(point),
        threeDigits(point.level),
        ...figures.map((path) => figureText(point, path)),
        ...parameters.map((p, i) => readable(cleaned(point.values[i], p), p.path)),
        ...bias(point),
      ]),
    },
    color,
  );
}

function figureText({ figures }: FrontDesign, path: string): string {
  const value = figureAt(figures, path);
  return path === 'pulse.energy_fj' && value !== null
    ? formatQuantity(value, 'pulseEnergy')
    : threeDigits(value);
}

/** The best design at a level within each bound of the third axis, tightest first. */
function bestBySlice(result: RunResult, level: number, color: boolean): string {
  const { goal } = result.study;
  const points = result.front.filter(
    (point, i) =>
      point.level >= level &&
      result.front.findIndex((p) => p.slice === point.slice && p.level >= level) === i,
  );
  return table(
    result,
    points,
    color,
    points.map(({ slice }) => boundText(goal, slice)),
  );
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
export function frontText(result: RunResult, directory: string, color: boolean): string {
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
    parts.push(goal.third === null ? table(result, result.front, color) : slicesText(result, color), '');
  if (goal.atLeast !== null) {
    const name = `signal ${symbolOf(goal.brightness)} ≥ ${goal.atLeast}`;
    if (result.best === null) parts.push(`best design at ${name}: out of reach`, '');
    else if (goal.third === null)
      parts.push(`best design at ${name}:`, table(result, [result.best], color), '');
    else {
      const bests = bestBySlice(result, goal.atLeast, color);
      parts.push(`best design at ${name}, by the bound of the ${thirdText(goal)?.name}:`, bests, '');
    }
  }
  if (result.outOfReach.length > 0)
    parts.push(`brightness levels out of reach: ${levelList(result.outOfReach)}`);
  if (result.explanation !== null) parts.push(explanationText(result.explanation, goal, color), '');
  if (result.front.length > 0) parts.push(accuracyLine(result));
  parts.push(
    `hypervolume ${threeDigits(hypervolume.value)} (${axis === null ? 'area' : 'volume'} between the front and the corner ${corner})`,
    `${evaluations} evaluations in ${duration(result.wall)}`,
    `files: ${directory}/front.csv, archive.csv, front.json, front.svg, designs/, ledger.jsonl`,
  );
  return parts.join('\n');
}
