import type { TopLevelSpec } from 'vega-lite';
import { axisScale, renderSvg } from './render.js';

/** A scanned parameter: title with unit, and its values in ascending order. */
export interface MapAxis {
  readonly title: string;
  readonly values: readonly number[];
  readonly log: boolean;
}

export interface MapFigure {
  readonly title: string;
  /** `values[j][i]` belongs to `y.values[j]` and `x.values[i]`; null where the figure does not exist. */
  readonly values: readonly (readonly (number | null)[])[];
}

/** Figures against two parameters. */
export interface MapPlot {
  readonly title: string;
  readonly subtitle: string;
  readonly x: MapAxis;
  readonly y: MapAxis;
  readonly figures: readonly MapFigure[];
}

/** Cells drawn edge to edge leave hairlines in most viewers: each reaches this share of the axis under the next one. */
const OVERLAP = 1.5e-3;

/** Cell borders: half-way between neighbours (in the logarithm on a logarithmic axis). */
function borders({ values, log }: MapAxis): [number, number][] {
  const there = log ? values.map(Math.log) : values;
  const back = (v: number) => (log ? Math.exp(v) : v);
  const last = there.length - 1;
  const overlap = OVERLAP * (there[last] - there[0]);
  return there.map((v, i) => {
    const low = i === 0 ? v - (there[1] - v) / 2 : (there[i - 1] + v) / 2;
    const high = i === last ? v + (v - there[last - 1]) / 2 : (v + there[i + 1]) / 2;
    return [back(low), back(i === last ? high : high + overlap)];
  });
}

export function mapChart(plot: MapPlot): TopLevelSpec {
  const xs = borders(plot.x);
  const ys = borders(plot.y);
  const axis = (a: MapAxis, edges: [number, number][], field: string) => ({
    field,
    type: 'quantitative',
    title: a.title,
    axis: { grid: false, format: '.4~g' },
    scale: {
      domain: [edges[0][0], edges[edges.length - 1][1]],
      nice: false,
      zero: false,
      type: a.log ? 'log' : 'linear',
    },
  });
  const panel = (figure: MapFigure) => {
    const cells = figure.values.flatMap((row, j) =>
      row.flatMap((value, i) =>
        value === null ? [] : [{ x0: xs[i][0], x1: xs[i][1], y0: ys[j][0], y1: ys[j][1], value }],
      ),
    );
    const type = axisScale(cells.map((cell) => cell.value));
    const scale = { scheme: 'viridis', type, ...(type === 'linear' ? { zero: false } : {}) };
    return {
      width: 460,
      height: 360,
      data: { values: cells },
      mark: { type: 'rect', clip: true },
      encoding: {
        x: axis(plot.x, xs, 'x0'),
        x2: { field: 'x1' },
        y: axis(plot.y, ys, 'y0'),
        y2: { field: 'y1' },
        color: {
          field: 'value',
          type: 'quantitative',
          title: figure.title,
          scale,
          legend: {
            type: 'gradient',
            orient: 'right',
            gradientLength: 330,
            gradientThickness: 16,
            format: '.2~g',
            titleOrient: 'right',
            titlePadding: 10,
          },
        },
      },
    };
  };
  return {
    title: { text: plot.title, subtitle: plot.subtitle },
    hconcat: plot.figures.map(panel),
    spacing: 40,
    resolve: { scale: { color: 'independent', x: 'independent', y: 'independent' } },
  } as unknown as TopLevelSpec;
}

/** SVG of colour maps with their colour bars; cells without a value stay white. */
export function plotMap(plot: MapPlot): Promise<string> {
  return renderSvg(mapChart(plot));
}
