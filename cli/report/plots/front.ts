import type { TopLevelSpec } from 'vega-lite';
import { axisScale, COLORS, renderSvg } from './render.js';

export interface FrontPoint {
  readonly brightness: number;
  readonly impurity: number;
}

/** Everything that the picture of a front shows. */
export interface FrontPlot {
  readonly title: string;
  readonly subtitle: string;
  /** Axis titles with basis and unit. */
  readonly brightnessTitle: string;
  readonly impurityTitle: string;
  /** Every non-dominated evaluation, by brightness. */
  readonly archive: readonly FrontPoint[];
  /** The points at the brightness levels asked for. */
  readonly front: readonly FrontPoint[];
  /** The brightness asked for and the best design at it. */
  readonly asked: { readonly level: number; readonly best: FrontPoint | null } | null;
}

const KINDS = { archive: 'non-dominated', front: 'front', best: 'best at the brightness asked for' };
const HEIGHT = 360;

/** Brightness shown: the levels and the mark with a margin; the dark end of the archive would squeeze them. */
function shown(plot: FrontPlot): [number, number] {
  const marks = plot.front.map((p) => p.brightness);
  if (plot.asked) marks.push(plot.asked.level);
  if (marks.length === 0) marks.push(...plot.archive.map((p) => p.brightness));
  if (marks.length === 0) return [0, 1];
  const [low, high] = [Math.min(...marks), Math.max(...marks)];
  const margin = 0.04 * (high - low) || 0.02 * Math.abs(high) || 0.02;
  return [low - margin, high + margin];
}

/** Of points that would lie on one another, by brightness, only the first: an archive can hold many thousands. */
function apart(points: readonly FrontPoint[], [low, high]: readonly [number, number]): FrontPoint[] {
  const kept: FrontPoint[] = [];
  for (const point of points) {
    const last = kept[kept.length - 1];
    const near = last !== undefined && point.brightness - last.brightness < (high - low) / 600;
    if (!near || Math.abs(point.impurity - last.impurity) > 0.01 * last.impurity) kept.push(point);
  }
  return kept;
}

export function frontChart(plot: FrontPlot): TopLevelSpec {
  const domain = shown(plot);
  const inside = (p: FrontPoint) => p.brightness >= domain[0] && p.brightness <= domain[1];
  const rows = [
    ...apart(plot.archive.filter(inside), domain).map((p) => ({ ...p, kind: KINDS.archive })),
    ...plot.front.map((p) => ({ ...p, kind: KINDS.front })),
    ...(plot.asked?.best ? [{ ...plot.asked.best, kind: KINDS.best }] : []),
  ];
  const present = Object.values(KINDS).filter((kind) => rows.some((row) => row.kind === kind));
  const looks: Record<string, { color: string; shape: string; size: number }> = {
    [KINDS.archive]: { color: COLORS.quiet, shape: 'circle', size: 8 },
    [KINDS.front]: { color: COLORS.point, shape: 'circle', size: 55 },
    [KINDS.best]: { color: COLORS.mark, shape: 'diamond', size: 170 },
  };
  const range = (key: 'color' | 'shape' | 'size') => present.map((kind) => looks[kind][key]);
  const scale = (key: 'color' | 'shape' | 'size') => ({ domain: present, range: range(key) as never });
  const x = {
    field: 'brightness',
    type: 'quantitative',
    title: plot.brightnessTitle,
    scale: { domain, nice: false },
  } as const;
  const type = axisScale(rows.map((row) => row.impurity));
  const y = {
    field: 'impurity',
    type: 'quantitative',
    title: plot.impurityTitle,
    scale:
      type === 'log'
        ? { type, nice: false, padding: 12 }
        : { type, zero: false, ...(rows.length === 0 ? { domain: [0, 1] } : {}) },
    axis: { format: '.1~e', tickCount: 6 },
  } as const;
  const points = {
    data: { values: rows },
    mark: { type: 'point', filled: true, opacity: 1, clip: true },
    encoding: {
      x,
      y,
      color: {
        field: 'kind',
        type: 'nominal',
        title: null,
        scale: scale('color'),
        legend: { orient: 'bottom', columns: 3, columnPadding: 24, symbolOpacity: 1 },
      },
      shape: { field: 'kind', type: 'nominal', title: null, scale: scale('shape') },
      size: { field: 'kind', type: 'nominal', title: null, scale: scale('size'), sort: present },
    },
  } as const;
  return {
    width: 560,
    height: HEIGHT,
    title: { text: plot.title, subtitle: plot.subtitle },
    layer: [...askedLayers(plot, x, domain), points],
  } as unknown as TopLevelSpec;
}

/**
 * A dashed line at the brightness asked for, with its name where a front leaves room: right of the line at the foot, or
 * left of it at the top.
 */
function askedLayers(plot: FrontPlot, x: object, [low, high]: readonly [number, number]): object[] {
  if (!plot.asked) return [];
  const data = { values: [{ brightness: plot.asked.level }] };
  const right = plot.asked.level < low + 0.7 * (high - low);
  const place = right ? { align: 'left', dx: 6 } : { align: 'right', dx: -6 };
  return [
    { data, mark: { type: 'rule', strokeDash: [5, 4], color: COLORS.mark }, encoding: { x } },
    {
      data,
      mark: {
        type: 'text',
        ...place,
        color: COLORS.mark,
        fontSize: 12,
        text: `asked for: ${plot.asked.level}`,
      },
      encoding: { x, y: { value: right ? HEIGHT - 14 : 12 } },
    },
  ];
}

/** SVG of a Pareto front; the impurity axis is logarithmic where it spans more than a decade. */
export function plotFront(plot: FrontPlot): Promise<string> {
  return renderSvg(frontChart(plot));
}
