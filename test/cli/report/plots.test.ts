import { Resvg } from '@resvg/resvg-js';
import { describe, expect, it } from 'vitest';
import { type CurvesPlot, plotCurves } from '../../../cli/report/plots/curves.js';
import { type FrontPlot, frontChart, plotFront } from '../../../cli/report/plots/front.js';
import { type MapPlot, plotMap } from '../../../cli/report/plots/map.js';
import { plotSeries, seriesChart } from '../../../cli/report/plots/series.js';

const points = Array.from({ length: 40 }, (_, i) => ({
  brightness: 0.2 + i / 100,
  impurity: 1e-5 * 1.15 ** i,
}));
const front: FrontPlot = {
  title: 'Dot & <link>',
  subtitle: 'two-level emitter',
  brightnessTitle: 'brightness per pulse: P(n=1), signal',
  impurityTitle: 'impurity per pulse: P(n≥2), collected',
  archive: points,
  front: points.filter((_, i) => i % 8 === 0),
  asked: { level: 0.4, best: points[20] },
};
const curves: CurvesPlot = {
  title: 'Rabi',
  subtitle: '',
  xTitle: 'tone 0 area (π)',
  x: [0, 1, 2, 3],
  logX: false,
  curves: [
    { title: 'P(n=1), signal', values: [0, 1, 0, 1] },
    { title: 'g⁽²⁾[0], collected', values: [null, 0.01, 3, 0.1] },
  ],
};
const map: MapPlot = {
  title: 'Map',
  subtitle: '',
  x: { title: 'tone 0 area (π)', values: [1, 2, 3], log: false },
  y: { title: 'tone 0 fwhm (ps)', values: [1, 10], log: true },
  figures: [
    {
      title: 'P(n=1), signal',
      values: [
        [0, 0.5, 1],
        [null, 0.2, 0.1],
      ],
    },
  ],
};

/** An SVG that a renderer takes, with something painted on it. */
function painted(svg: string): { width: number; height: number; colours: number } {
  const image = new Resvg(svg, { font: { loadSystemFonts: false } }).render();
  const pixels = new Uint32Array(new Uint8Array(image.pixels).buffer);
  return { width: image.width, height: image.height, colours: new Set(pixels).size };
}

describe('pictures', () => {
  it.each([
    ['front', () => plotFront(front)],
    ['curves', () => plotCurves(curves)],
    ['map', () => plotMap(map)],
  ])('of %s have the same bytes each time and can be rendered', async (_, plot) => {
    const svg = await plot();
    expect(await plot()).toBe(svg);
    const { width, height, colours } = painted(svg);
    expect(width).toBeGreaterThan(400);
    expect(height).toBeGreaterThan(300);
    expect(colours).toBeGreaterThan(10);
    expect(svg).not.toMatch(/NaN|undefined|<image|href="http/);
  });

  it('name figure, basis and what was asked for', async () => {
    const svg = await plotFront(front);
    for (const text of [
      front.brightnessTitle,
      front.impurityTitle,
      'asked for: 0.4',
      'Dot &amp; &lt;link&gt;',
    ]) {
      expect(svg).toContain(text);
    }
  });

  it('take a logarithmic impurity axis only over more than a decade', () => {
    const scaleOf = (plot: FrontPlot) => JSON.stringify(frontChart(plot));
    expect(scaleOf(front)).toContain('"type":"log"');
    const narrow = points.map((p) => ({ ...p, impurity: 1e-4 + p.brightness * 1e-4 }));
    const flat = { ...front, archive: narrow, front: narrow.slice(0, 3), asked: null };
    expect(scaleOf(flat)).not.toContain('"type":"log"');
    const zero = { ...front, archive: [{ brightness: 0.3, impurity: 0 }, ...points] };
    expect(scaleOf(zero)).not.toContain('"type":"log"');
  });

  it('show a front of one point, and one without any', async () => {
    for (const front1 of [[points[3]], []]) {
      const svg = await plotFront({ ...front, archive: front1, front: front1, asked: null });
      expect(svg).not.toContain('NaN');
      expect(painted(svg).colours).toBeGreaterThan(3);
    }
  });

  it('name every line of a panel and leave out what a logarithm cannot show', async () => {
    const series = {
      title: 'Lines',
      subtitle:
        'a subtitle that is too long for the panel, broken at its commas, so that the right stays full',
      xTitle: 'pulse width (ps)',
      yTitle: 'g⁽²⁾[0]',
      logX: true,
      logY: true,
      series: ['first', 'second'].map((name, k) => ({
        name,
        points: [0, 1, 2, 3].map((x) => ({ x, y: k + x * 1e-4 })),
      })),
    };
    const svg = await plotSeries(series);
    expect(await plotSeries(series)).toBe(svg);
    for (const text of ['first', 'second', 'pulse width (ps)', 'g⁽²⁾[0]']) expect(svg).toContain(text);
    expect(svg).not.toMatch(/NaN|Infinity|undefined/);
    expect(painted(svg).width).toBeLessThan(700);
    const drawn = JSON.stringify(seriesChart(series));
    expect(drawn).not.toContain('"x":0,');
    expect(drawn.match(/"name":"first"/g)).toHaveLength(3);
  });

  it('have a colour bar on a map and leave cells without a value white', async () => {
    const svg = await plotMap(map);
    expect(svg).toContain('linearGradient');
    expect(
      svg.match(/aria-roledescription="rect mark"|<path[^>]*fill="#[0-9a-f]{6}"|<path[^>]*fill="rgb/g)
        ?.length,
    ).toBeGreaterThanOrEqual(5);
  });
});
