import type { TopLevelSpec } from 'vega-lite';
import { axisScale, COLORS, renderSvg } from './render.js';

export interface Curve {
  readonly title: string;
  /** Null where the figure does not exist: the line breaks there. */
  readonly values: readonly (number | null)[];
}

/** Figures against one parameter. */
export interface CurvesPlot {
  readonly title: string;
  readonly subtitle: string;
  /** Parameter with unit. */
  readonly xTitle: string;
  readonly x: readonly number[];
  readonly curves: readonly Curve[];
  readonly logX: boolean;
}

export function curvesChart(plot: CurvesPlot): TopLevelSpec {
  const last = plot.curves.length - 1;
  const panel = (curve: Curve, i: number) => {
    const present = curve.values.filter((v) => v !== null);
    const type = axisScale(present);
    return {
      width: 560,
      height: plot.curves.length === 1 ? 340 : 180,
      data: { values: plot.x.map((x, k) => ({ x, y: curve.values[k] })) },
      mark: {
        type: 'line',
        color: COLORS.point,
        strokeWidth: 1.8,
        invalid: 'break-paths-show-path-domains',
        point: plot.x.length <= 41 ? { color: COLORS.point, size: 16 } : false,
      },
      encoding: {
        x: {
          field: 'x',
          type: 'quantitative',
          title: i === last ? plot.xTitle : null,
          scale: plot.logX ? { type: 'log', nice: false } : { zero: false, nice: false },
        },
        y: {
          field: 'y',
          type: 'quantitative',
          title: curve.title,
          scale: type === 'log' ? { type, nice: false, padding: 8 } : { type, zero: false },
          axis: { tickCount: 5, format: type === 'log' ? '.0e' : '.3~g', minExtent: 60 },
        },
      },
    };
  };
  return {
    title: { text: plot.title, subtitle: plot.subtitle },
    vconcat: plot.curves.map(panel),
    spacing: 24,
    resolve: { scale: { x: 'independent' } },
  } as unknown as TopLevelSpec;
}

/** SVG of curves, one below the other with the same parameter axis. */
export function plotCurves(plot: CurvesPlot): Promise<string> {
  return renderSvg(curvesChart(plot));
}
