import type { TopLevelSpec } from 'vega-lite';
import { axisScale, COLORS, renderSvg } from './render.js';

/** Brightness and impurity against the rms of a drift, in units of its own. */
export interface ToleranceCurve {
  readonly name: string;
  readonly points: readonly {
    readonly factor: number;
    readonly brightness: number;
    readonly impurity: number;
  }[];
}

export interface TolerancePlot {
  readonly title: string;
  readonly subtitle: string;
  readonly brightnessTitle: string;
  readonly impurityTitle: string;
  readonly curves: readonly ToleranceCurve[];
  /** Demanded values; null for none. */
  readonly brightness: number | null;
  readonly impurity: number | null;
}

/** Okabe & Ito, Color Universal Design (2008). */
const PALETTE = ['#0072B2', '#D55E00', '#009E73', '#CC79A7', '#333333'];

export function toleranceChart(plot: TolerancePlot): TopLevelSpec {
  const values = plot.curves.flatMap(({ name, points }) => points.map((p) => ({ ...p, drift: name })));
  const panel = (field: 'brightness' | 'impurity', title: string, demanded: number | null, last: boolean) => {
    const shown = [...values.map((v) => v[field]), ...(demanded === null ? [] : [demanded])];
    const type = axisScale(shown);
    const small = Math.max(...shown.map(Math.abs)) < 0.01;
    const y = {
      field,
      type: 'quantitative',
      title,
      scale: type === 'log' ? { type, nice: false, padding: 8 } : { type, zero: false },
      axis: { tickCount: 5, format: type === 'log' ? '.0e' : small ? '.2~e' : '.3~g', minExtent: 60 },
    };
    const line = {
      data: { values },
      mark: { type: 'line', strokeWidth: 1.8, point: { size: 18 } },
      encoding: {
        x: {
          field: 'factor',
          type: 'quantitative',
          title: last ? 'rms, as a multiple of what the legend says' : null,
          scale: { nice: false },
        },
        y,
        color: {
          field: 'drift',
          type: 'nominal',
          title: null,
          scale: { domain: plot.curves.map(({ name }) => name), range: PALETTE.slice(0, plot.curves.length) },
          legend: { orient: 'bottom', direction: 'vertical', columns: 1, labelLimit: 540 },
        },
      },
    };
    const rule = {
      data: { values: [{ level: demanded }] },
      mark: { type: 'rule', strokeDash: [5, 4], color: COLORS.text },
      encoding: { y: { field: 'level', type: 'quantitative' } },
    };
    return { width: 560, height: 190, layer: demanded === null ? [line] : [rule, line] };
  };
  return {
    title: { text: plot.title, subtitle: plot.subtitle },
    vconcat: [
      panel('brightness', plot.brightnessTitle, plot.brightness, false),
      panel('impurity', plot.impurityTitle, plot.impurity, true),
    ],
    spacing: 24,
  } as unknown as TopLevelSpec;
}

/** SVG of what drift does to a design; dashed lines are what is demanded. */
export function plotTolerance(plot: TolerancePlot): Promise<string> {
  return renderSvg(toleranceChart(plot));
}
