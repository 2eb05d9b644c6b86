import type { TopLevelSpec } from 'vega-lite';

/** Common look: one sans-serif face everywhere, thin grid, no top or right frame. */
const CONFIG: NonNullable<TopLevelSpec['config']> = {
  background: 'white',
  font: 'DejaVu Sans, Verdana, sans-serif',
  padding: 12,
  axis: {
    labelFontSize: 12,
    titleFontSize: 13,
    titleFontWeight: 'normal',
    titlePadding: 10,
    labelFlush: false,
    gridColor: '#dddddd',
    // Unlabelled lines of a logarithmic axis stay in the background.
    gridOpacity: { condition: { test: "datum.label === ''", value: 0.35 }, value: 1 },
    domainColor: '#555555',
    tickColor: '#555555',
  },
  title: {
    fontSize: 14,
    fontWeight: 'normal',
    anchor: 'start',
    offset: 10,
    subtitleFontSize: 11,
    subtitleColor: '#555555',
  },
  legend: {
    labelFontSize: 12,
    labelLimit: 400,
    titleFontSize: 12,
    titleFontWeight: 'normal',
    titleLimit: 400,
  },
  view: { stroke: null },
};

/** Ordinal colours that stay apart for colour-blind readers. Source: Okabe & Ito, Color Universal Design (2008). */
export const COLORS = { point: '#0072B2', mark: '#D55E00', quiet: '#9a9a9a', text: '#333333' } as const;

/** Looks of lines that stand in one panel: colours of the same source, told apart by the shape of their points too. */
export const SERIES: readonly { readonly color: string; readonly shape: string }[] = [
  { color: '#0072B2', shape: 'circle' },
  { color: '#D55E00', shape: 'square' },
  { color: '#009E73', shape: 'triangle-up' },
  { color: '#CC79A7', shape: 'diamond' },
  { color: '#E69F00', shape: 'triangle-down' },
  { color: '#56B4E9', shape: 'cross' },
];

/** Loads what draws, which takes longer than most pictures: worth a call while other threads are at work. */
export async function loadDrawing(): Promise<{
  readonly vega: typeof import('vega');
  readonly lite: typeof import('vega-lite');
}> {
  const [vega, lite] = await Promise.all([import('vega'), import('vega-lite')]);
  return { vega, lite };
}

/** Static SVG of a chart; the same specification gives the same bytes. */
export async function renderSvg(chart: TopLevelSpec): Promise<string> {
  const { vega, lite } = await loadDrawing();
  const { spec } = lite.compile({ ...chart, config: CONFIG }, { logger: vega.logger(vega.Error) });
  // Identifiers in the SVG count on from chart to chart otherwise.
  vega.resetSVGDefIds();
  const view = new vega.View(vega.parse(spec), { renderer: 'none', logLevel: vega.Error });
  try {
    return `${await view.toSVG()}\n`;
  } finally {
    view.finalize();
  }
}

/** A logarithmic axis serves values that are all positive and span more than a decade. */
export function axisScale(values: readonly number[]): 'log' | 'linear' {
  const low = Math.min(...values);
  return low > 0 && Math.max(...values) > 10 * low ? 'log' : 'linear';
}
