import type { TopLevelSpec } from 'vega-lite';
import { COLORS, renderSvg, SERIES } from './render.js';

const HEIGHT = 360;

export interface Series {
  /** What the legend says. */
  readonly name: string;
  readonly points: readonly { readonly x: number; readonly y: number }[];
}

/** Several named lines in one panel. */
export interface SeriesPlot {
  readonly title: string;
  readonly subtitle: string;
  /** Axis titles with basis and unit. */
  readonly xTitle: string;
  readonly yTitle: string;
  readonly logX: boolean;
  readonly logY: boolean;
  readonly series: readonly Series[];
  /** What the legend's names stand for; left out where they speak for themselves. */
  readonly legend?: string;
  /** A vertical dashed line, with its name. */
  readonly mark?: { readonly x: number; readonly name: string } | null;
}

/** Without a canvas, the width of a text is guessed too large: a longer subtitle would leave the right side empty. */
const SUBTITLE = 68;

/** A text broken at its commas and semicolons into lines that are no wider than the panel. */
function broken(text: string): string[] {
  const lines = [''];
  for (const part of text.split(/(?<=[,;]) /)) {
    const last = lines[lines.length - 1];
    const longer = last === '' ? part : `${last} ${part}`;
    if (last === '' || longer.length <= SUBTITLE) lines[lines.length - 1] = longer;
    else lines.push(part);
  }
  return lines;
}

/** More lines than this cannot be told apart. */
export const MOST_SERIES = SERIES.length;

export function seriesChart(plot: SeriesPlot): TopLevelSpec {
  const domain = plot.series.map(({ name }) => name);
  // A logarithmic axis has no place for zero.
  const shown = (x: number, y: number) => (!plot.logX || x > 0) && (!plot.logY || y > 0);
  const values = plot.series.flatMap(({ name, points }) =>
    points.filter(({ x, y }) => shown(x, y)).map(({ x, y }) => ({ x, y, name })),
  );
  const axis = (field: 'x' | 'y', title: string, log: boolean) => ({
    field,
    type: 'quantitative',
    title,
    scale: log ? { type: 'log', nice: false, padding: 14 } : { zero: false, nice: false, padding: 14 },
    axis: field === 'y' ? { format: log ? '.0~e' : '.3~g', tickCount: 6 } : { format: '.3~g', tickCount: 8 },
  });
  const looks = { domain, range: SERIES.slice(0, domain.length).map(({ color }) => color) };
  const shapes = { domain, range: SERIES.slice(0, domain.length).map(({ shape }) => shape) };
  const legend = {
    orient: 'bottom',
    direction: 'vertical',
    columns: 1,
    symbolOpacity: 1,
    labelLimit: 540,
    titleLimit: 540,
    title: plot.legend ?? null,
  };
  const lines = {
    data: { values },
    mark: { type: 'line', strokeWidth: 1.8, point: { filled: true, size: 45, opacity: 1 } },
    encoding: {
      x: axis('x', plot.xTitle, plot.logX),
      y: axis('y', plot.yTitle, plot.logY),
      // A line runs along x; without this it would be sorted by its name's place in the data.
      order: { field: 'x', type: 'quantitative' },
      color: { field: 'name', type: 'nominal', scale: looks, legend },
      shape: { field: 'name', type: 'nominal', scale: shapes, legend },
    },
  };
  return {
    width: 560,
    height: HEIGHT,
    title: { text: plot.title, subtitle: broken(plot.subtitle) },
    ...(plot.mark ? { layer: [...markLayers(plot.mark), lines] } : lines),
  } as unknown as TopLevelSpec;
}

function markLayers({ x, name }: { readonly x: number; readonly name: string }): object[] {
  const data = { values: [{ x }] };
  const at = { field: 'x', type: 'quantitative' };
  const text = { type: 'text', align: 'left', dx: 6, fontSize: 12, color: COLORS.text, text: name };
  return [
    { data, mark: { type: 'rule', strokeDash: [5, 4], color: COLORS.text }, encoding: { x: at } },
    { data, mark: text, encoding: { x: at, y: { value: HEIGHT - 10 } } },
  ];
}

/** SVG of several lines with a legend; points that a logarithmic axis cannot show are left out. */
export function plotSeries(plot: SeriesPlot): Promise<string> {
  return renderSvg(seriesChart(plot));
}
