import { applyParameters, type EvaluatedPoint, thirdAxes } from '../../optimizers/index.js';
import { biasOf } from '../study/index.js';
import { type FigureShape, figureAt, figurePaths } from './columns.js';
import { ARCHIVE_FORMAT, FRONT_FORMAT, type RunIdentity, type RunResult } from './contract.js';
import { type Cell, csv } from './csv.js';
import { columnOf, inColumn } from './parameters.js';

/** What every table of figures has to say about its numbers. */
export const BASES = [
  'emitted: every photon of the collected line and polarisation; filtered: behind the filter; signal: after polariser and efficiency; collected: signal plus leaked laser light; all per pulse',
];

function identityLines({ study, hash, version }: RunIdentity): string[] {
  const { goal, search } = study;
  return [
    `study: ${study.title}`,
    `study hash: ${hash}`,
    `pulsewright ${version}, seed ${search.seed}, at most ${search.evaluations} evaluations`,
    `goal: least collected.${goal.impurity} at signal.${goal.brightness} of at least each level${thirdGoal(study)}`,
    ...BASES,
  ];
}

function thirdGoal({ goal }: RunIdentity['study']): string {
  if (goal.third === null) return '';
  const { figure, sense } = thirdAxes[goal.third.axis];
  return `, and the ${sense} ${figure}`;
}

/** Name of the column with the bound of a slice. */
function sliceColumn({ goal }: RunIdentity['study']): string[] {
  if (goal.third === null) return [];
  return [goal.third.axis === 'energy' ? 'slice [fJ]' : 'slice [photons per pulse]'];
}

function sliceLine({ goal }: RunIdentity['study']): string[] {
  if (goal.third === null) return [];
  const { figure, sense } = thirdAxes[goal.third.axis];
  const side = sense === 'least' ? 'at most' : 'at least';
  return [`slice: a front of its own, of designs with ${figure} ${side} that; empty: without such a bound`];
}

function figureShape({ study }: RunIdentity, points: readonly EvaluatedPoint[]): FigureShape {
  const { collection, drift, laser } = study.design;
  const levels = points.length > 0 ? Object.keys(points[0].figures.populations) : [];
  return {
    filtered: collection.filter !== null,
    drift: drift !== null,
    energies: (laser?.piPulse ?? null) !== null,
    quantile: drift !== null && drift.quantile !== null,
    levels,
  };
}

/** Parameter cells, the bias to set where the line can be tuned, and figure cells of points, with their columns. */
export function pointTable(
  identity: RunIdentity,
  points: readonly EvaluatedPoint[],
): { columns: string[]; rows: Cell[][] } {
  const paths = figurePaths(figureShape(identity, points));
  const { study } = identity;
  const { parameters } = study;
  return {
    columns: [
      ...parameters.map((p) => columnOf(p.path)),
      ...(study.tuning === null ? [] : ['bias [mV]']),
      ...paths,
    ],
    rows: points.map(({ values, figures }) => [
      ...parameters.map((p, i) => inColumn(values[i], p.path)),
      ...(study.tuning === null ? [] : [biasOf(study, applyParameters(study, values))]),
      ...paths.map((path) => figureAt(figures, path)),
    ]),
  };
}

/** front.csv: one line per design of the front. No clock, no dates: the same run gives the same bytes. */
export function frontCsv(result: RunResult): string {
  const { columns, rows } = pointTable(result, result.front);
  const comments = [
    FRONT_FORMAT,
    ...identityLines(result),
    'level: highest brightness level asked for that the design serves; figures evaluated anew at accuracy quoted',
    ...sliceLine(result.study),
    ...(result.outOfReach.length > 0 ? [`out of reach: ${result.outOfReach.join(' ')}`] : []),
  ];
  const sliced = sliceColumn(result.study);
  const full = rows.map((row, i) => {
    const { level, slice, file } = result.front[i];
    return [level, ...(sliced.length > 0 ? [slice] : []), file, ...row];
  });
  return csv(comments, ['level', ...sliced, 'design', ...columns], full);
}

/** archive.csv: every non-dominated evaluation of the search, by brightness. */
export function archiveCsv(result: RunResult): string {
  const { columns, rows } = pointTable(result, result.archive);
  const comments = [
    ARCHIVE_FORMAT,
    ...identityLines(result),
    'every non-dominated evaluation; figures at accuracy search (one propagation, its own error estimate): front.csv holds the quoted ones',
  ];
  return csv(comments, columns, rows);
}
