import { describe, expect, it } from 'vitest';
import { figureLabel } from '../../../cli/report/labels.js';
import { duration, threeDigits } from '../../../cli/report/numbers.js';
import { figurePaths } from '../../../cli/run/columns.js';
import { csv } from '../../../cli/run/csv.js';
import { columnOf, inColumn, quantityPaths, readable } from '../../../cli/run/parameters.js';

describe('numbers for people', () => {
  it.each([
    [0.6044, '0.604'],
    [0.99951, '1.00'],
    [1250.4, '1250'],
    [12.34, '12.3'],
    [-0.0456, '-0.0456'],
    [0.001, '0.00100'],
    [0.00099951, '1.00e-3'],
    [1.2345e-7, '1.23e-7'],
    [123456, '1.23e5'],
    [0, '0'],
    [null, '–'],
    [Number.NaN, '–'],
  ])('writes %d as %s', (value, text) => {
    expect(threeDigits(value)).toBe(text);
  });

  it.each([
    [1.26, '1.3 s'],
    [42.4, '42 s'],
    [190, '3 min 10 s'],
    [7500, '2 h 5 min'],
  ])('writes %d seconds as %s', (value, text) => {
    expect(duration(value)).toBe(text);
  });
});

describe('columns', () => {
  it('gives a parameter its unit and its value in that unit', () => {
    expect(columnOf('pulse.tones.0.fwhm')).toBe('pulse.tones.0.fwhm [ps]');
    expect(columnOf('pulse.tones.1.area')).toBe('pulse.tones.1.area [pi]');
    expect(columnOf('collection.efficiency')).toBe('collection.efficiency');
    expect(inColumn(Math.PI / 2, 'pulse.tones.0.area')).toBe(0.5);
    expect(inColumn(0.9253, 'emitter.wavelength')).toBe(925.3);
    expect(readable(0.12345, 'pulse.tones.0.detuning')).toBe('123 ueV');
  });

  it('knows every quantity of a study with two tones', () => {
    const paths = quantityPaths(2);
    for (const path of ['pulse.tones.1.gdd', 'collection.filter.fwhm', 'emitter.lifetime'])
      expect(paths).toContain(path);
    expect(paths).not.toContain('pulse.tones.2.gdd');
    expect(paths).not.toContain('pulse.tones.0.shape');
  });

  it('has a label with its basis for every figure', () => {
    const shape = { filtered: true, drift: true, energies: true, levels: ['g', 'x'] };
    for (const path of figurePaths(shape)) {
      const basis = /^(?:nominal\.)?(emitted|signal|collected)\./.exec(path)?.[1];
      if (basis) expect(figureLabel(path)).toContain(basis);
      if (path.includes('filtered.')) expect(figureLabel(path)).toContain('behind the filter');
      if (path.startsWith('nominal.')) expect(figureLabel(path)).toContain('without drift');
    }
    expect(new Set(figurePaths(shape).map(figureLabel)).size).toBe(figurePaths(shape).length);
  });

  it('writes numbers that read back as the same double, and quotes what needs it', () => {
    const value = 0.1 + 0.2;
    const text = csv(
      ['two\nlines'],
      ['a', 'b, c', 'd'],
      [
        [value, 'say "x"', null],
        [Number.NaN, '', 1e-300],
      ],
    );
    expect(text).toBe('# two lines\na,"b, c",d\n0.30000000000000004,"say ""x""",\n,,1e-300\n');
    expect(Number(text.split('\n')[2].split(',')[0])).toBe(value);
  });
});
