import type { Figures } from '../../core/index.js';
import { type FigureShape, figureAt, figurePaths } from '../run/columns.js';
import { type Cell, csv } from '../run/csv.js';
import { columnOf, inColumn, readable, unitOf } from '../run/parameters.js';
import { BASES } from '../run/tables.js';
import { figureLabel } from './labels.js';
import { threeDigits } from './numbers.js';
import { plotCurves } from './plots/curves.js';
import { plotMap } from './plots/map.js';
import { tableText } from './table.js';

export const SCAN_FORMAT = 'pulsewright.scan/1';

/** A scanned parameter. */
export interface ScanAxis {
  readonly path: string;
  /** In order, internal units; ascending unless it goes together with another. */
  readonly values: readonly number[];
  readonly log: boolean;
}

/** A finished scan: the first axis runs fastest, or all of them step together. */
export interface Scan {
  readonly title: string;
  readonly hash: string;
  readonly version: string;
  readonly accuracy: string;
  /** One or two; any number of the same length when they step together. */
  readonly axes: readonly ScanAxis[];
  readonly together: boolean;
  /** Null where the pulse is beyond what can be integrated. */
  readonly points: readonly (Figures | null)[];
  readonly shape: FigureShape;
  /** Paths of the figures to show. */
  readonly shown: readonly string[];
}

/** Parameter values of point `index`, internal units. */
export function valuesAt(scan: Pick<Scan, 'axes' | 'together'>, index: number): number[] {
  if (scan.together) return scan.axes.map(({ values }) => values[index]);
  let rest = index;
  return scan.axes.map(({ values }) => {
    const i = rest % values.length;
    rest = Math.floor(rest / values.length);
    return values[i];
  });
}

const figure = (point: Figures | null, path: string): number | null =>
  point === null ? null : figureAt(point, path);

export function scanCsv(scan: Scan): string {
  const paths = figurePaths(scan.shape);
  const rows = scan.points.map((point, index): Cell[] => [
    ...valuesAt(scan, index).map((value, k) => inColumn(value, scan.axes[k].path)),
    ...paths.map((path) => figure(point, path)),
  ]);
  const comments = [
    SCAN_FORMAT,
    `study: ${scan.title}`,
    `study hash: ${scan.hash} (at the first point)`,
    `pulsewright ${scan.version}, accuracy ${scan.accuracy}`,
    ...BASES,
  ];
  return csv(comments, [...scan.axes.map(({ path }) => columnOf(path)), ...paths], rows);
}

/** The JSON document of a scan. */
export function scanDocument(scan: Scan): unknown {
  const { title, hash, version, accuracy, axes, together } = scan;
  const points = scan.points.map((figures, index) => ({
    parameters: Object.fromEntries(
      valuesAt(scan, index).map((value, k) => [columnOf(axes[k].path), inColumn(value, axes[k].path)]),
    ),
    figures,
  }));
  return { format: SCAN_FORMAT, version, study: { title, hash }, accuracy, together, points };
}

/** `tone 0 area (π)`: what stands at an axis. */
function axisTitle(path: string): string {
  const unit =
    unitOf(path) === 'pi' ? 'π' : unitOf(path).replace('^2', '²').replace('^3', '³').replace('um', 'µm');
  const name = path
    .replace(/^pulse\.tones\.(\d+)\./, 'tone $1 ')
    .replaceAll('.', ' ')
    .replaceAll('_', ' ');
  return unit === '' ? name : `${name} (${unit})`;
}

export function scanPicture(scan: Scan): Promise<string> {
  const [x, y] = scan.axes.map(({ path, values, log }) => ({
    title: axisTitle(path),
    values: values.map((value) => inColumn(value, path)),
    log,
  }));
  const head = {
    title: scan.title,
    subtitle: `per pulse, accuracy ${scan.accuracy}, study ${scan.hash.slice(0, 8)}`,
  };
  if (y === undefined || scan.together) {
    const curves = scan.shown.map((path) => ({
      title: figureLabel(path),
      values: scan.points.map((point) => figure(point, path)),
    }));
    const others = scan.axes.slice(1).map(({ path }) => axisTitle(path).replace(/ \(.*\)$/, ''));
    const along =
      others.length === 0 ? '' : `; ${others.join(', ')} step${others.length === 1 ? 's' : ''} along`;
    return plotCurves({ ...head, xTitle: `${x.title}${along}`, x: x.values, logX: x.log, curves });
  }
  const rows = (path: string) =>
    y.values.map((_, j) => x.values.map((__, i) => figure(scan.points[j * x.values.length + i], path)));
  const figures = scan.shown.map((path) => ({ title: figureLabel(path), values: rows(path) }));
  return plotMap({ ...head, x, y, figures });
}

/** Least and greatest value of each shown figure, and where. */
export function scanText(scan: Scan, color: boolean): string {
  const place = (index: number) =>
    valuesAt(scan, index)
      .map((value, k) => readable(value, scan.axes[k].path))
      .join(', ');
  const rows = scan.shown.flatMap((path) => {
    const present = scan.points.flatMap((point, index) => {
      const value = figure(point, path);
      return value === null ? [] : [{ value, index }];
    });
    if (present.length === 0) return [[figureLabel(path), '–', '', '–', '']];
    const least = present.reduce((a, b) => (b.value < a.value ? b : a));
    const most = present.reduce((a, b) => (b.value > a.value ? b : a));
    return [
      [
        figureLabel(path),
        threeDigits(least.value),
        place(least.index),
        threeDigits(most.value),
        place(most.index),
      ],
    ];
  });
  const where = scan.axes.map(({ path }) => axisTitle(path).replace(/ \(.*\)$/, '')).join(', ');
  return tableText({ head: ['figure', 'least', `at ${where}`, 'greatest', `at ${where}`], rows }, color);
}
