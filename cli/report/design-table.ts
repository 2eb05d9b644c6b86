import { dimensionInfo, formatQuantity, inUnit } from '../../core/index.js';
import { applyParameters, type FreeParameter } from '../../optimizers/index.js';
import { figureAt } from '../run/columns.js';
import type { FrontDesign, RunResult } from '../run/contract.js';
import { dimensionAt } from '../run/parameters.js';
import { biasOf, type Study } from '../study/index.js';
import { symbolOf } from './labels.js';
import { threeDigits } from './numbers.js';
import { type Style, tableText } from './table.js';
import { thirdText } from './third.js';

interface Column {
  readonly head: string;
  readonly cells: readonly string[];
}

export const designName = ({ file }: FrontDesign): string => file.replace(/^.*\//, '').replace('.yaml', '');

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

/** Values of one quantity in one unit, that of the largest of them. */
export function inOneUnit(values: readonly number[], path: string): string[] {
  const dimension = dimensionAt(path);
  if (dimension === null) throw new Error(`${path} is no quantity of a study`);
  const largest = values.reduce((a, b) => (Math.abs(b) > Math.abs(a) ? b : a), 0);
  const unit = formatQuantity(largest, dimension).split(' ').at(1) ?? '';
  const known = dimensionInfo(dimension).units.some(({ name }) => name === unit);
  return values.map((value) =>
    known ? `${threeDigits(inUnit(value, dimension, unit))} ${unit}` : threeDigits(value),
  );
}

function figureHead(path: string): string {
  if (path === 'pulse.energy_fj') return 'pulse\nenergy';
  const parts = path.split('.');
  const basis = parts[parts.length - 2];
  return `${symbolOf(parts[parts.length - 1])}\n${parts.length > 2 ? `${basis}, quantile` : basis}`;
}

function figureColumns(study: Study, points: readonly FrontDesign[]): Column[] {
  const { goal, design } = study;
  const axis = thirdText(goal);
  const others = ['multiphoton', 'g2'].filter((name) => name !== goal.impurity);
  // What the goal was judged on comes first.
  const judged = (design.drift?.quantile ?? null) === null ? '' : 'quantile.';
  const paths = [
    `${judged}signal.${goal.brightness}`,
    `${judged}collected.${goal.impurity}`,
    ...others.map((name) => `collected.${name}`),
    ...(axis === null ? [] : [axis.figure]),
  ];
  return paths.map((path) => ({
    head: figureHead(path),
    cells: points.map(({ figures }) => {
      const value = figureAt(figures, path);
      return path === axis?.figure && value !== null ? axis.value(value) : threeDigits(value);
    }),
  }));
}

function parameterColumns(study: Study, points: readonly FrontDesign[]): Column[] {
  const columns = study.parameters.map((parameter, i) => ({
    head: parameterHead(parameter.path),
    cells: inOneUnit(
      points.map(({ values }) => cleaned(values[i], parameter)),
      parameter.path,
    ),
  }));
  if (study.tuning === null) return columns;
  const bias = points.map(({ values }) => {
    const voltage = biasOf(study, applyParameters(study, values));
    return voltage === null ? '–' : formatQuantity(voltage, 'voltage', 4);
  });
  return [...columns, { head: 'bias\nto set', cells: bias }];
}

function joined(columns: readonly Column[], style: Style): string {
  const rows = columns[0].cells.map((_, i) => columns.map(({ cells }) => cells[i]));
  return tableText({ head: columns.map(({ head }) => head), rows }, style.color);
}

/**
 * Designs with their figures and parameters, one a line; where that is wider than the terminal, the parameters come in
 * a second table.
 * @param before columns that stand before all others
 */
export function designTable(
  { study }: RunResult,
  points: readonly FrontDesign[],
  style: Style,
  before: readonly Column[] = [],
): string {
  const names = { head: 'design', cells: points.map(designName) };
  const levels = { head: 'level', cells: points.map(({ level }) => threeDigits(level)) };
  const figures = [...before, names, levels, ...figureColumns(study, points)];
  const parameters = parameterColumns(study, points);
  const whole = joined([...figures, ...parameters], { ...style, color: false });
  const wide = whole.split('\n').some((line) => line.length > style.columns);
  if (!wide || parameters.length === 0) return joined([...figures, ...parameters], style);
  return `${joined(figures, style)}\n\n${joined([names, ...parameters], style)}`;
}
