import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import { describe, expect, it } from 'vitest';
import type { Figures } from '../../../core/index.js';
import { csvCells, FIXED, FREE, freshFolder, invoke, studyFile } from './invoke.js';

describe('evaluate', () => {
  it('prints one JSON document with the documented fields in their order', async () => {
    const { code, out, err } = await invoke(['evaluate', studyFile(FIXED), '--json']);
    expect(code).toBe(0);
    expect(err).toBe('');
    const document = JSON.parse(out) as Figures & { format: string };
    expect(Object.keys(document)).toEqual(
      'format emitted filtered signal collected nominal quantile populations pulse phonons accuracy bias_mv notes'.split(
        ' ',
      ),
    );
    expect(document.format).toBe('pulsewright.figures/1');
    expect(document.filtered).toBeNull();
    expect(document.nominal).toBeNull();
    // Two-level, γ = 1/500 ps, Gaussian π pulse of 5 ps: independent ODE code, window ±40 ps.
    expect(document.emitted.p[1]).toBeCloseTo(0.9978161334, 8);
    expect(document.emitted.g2).toBeCloseTo(4.33213974e-3, 8);
  });

  it('says which bias makes the detuning', async () => {
    const text = FIXED.replace(
      'lifetime',
      'tuning: { slope: -2 ueV/mV, bias: 0.5 V, range: [0.4 V, 0.6 V] }, lifetime',
    ).replace('area: 1 pi', 'area: 1 pi, detuning: 0.1 meV');
    const { out } = await invoke(['evaluate', studyFile(text), '--json']);
    // V = bias − δ/slope = 500 mV + 0.1/0.002 mV.
    expect((JSON.parse(out) as { bias_mv: number }).bias_mv).toBeCloseTo(550, 9);
    expect((await invoke(['evaluate', studyFile(text)])).out).toContain('550.0 mV');
    const plain = JSON.parse((await invoke(['evaluate', studyFile(FIXED), '--json'])).out) as object;
    expect(plain).toMatchObject({ bias_mv: null });
    const outside = await invoke(['evaluate', studyFile(text), '--set', 'tones.0.detuning=0.3 meV']);
    expect(outside.code).toBe(2);
    expect(outside.err).toContain('--set:1:');
    expect(outside.err).toContain('-200 ueV to 200 ueV');
  });

  it('holds the nominal tree under drift', async () => {
    const { out } = await invoke(['evaluate', studyFile(`${FIXED}drift: { area: 5 % }\n`), '--json']);
    const { nominal, signal } = JSON.parse(out) as Figures;
    expect(nominal?.signal.single).toBeGreaterThan(signal.single!);
  });

  it('holds the quantiles where a goal is judged on them', async () => {
    const drift = 'drift: { area: 5 %, judge: quantile, quantile: 0.8 }\n';
    const { out } = await invoke(['evaluate', studyFile(FIXED + drift), '--json']);
    const { quantile, signal } = JSON.parse(out) as Figures;
    expect(quantile?.share).toBe(0.8);
    // sin²(Θ/2) at 1.2816 rms from π: P(|z| < 1.2816) = 0.8 (tables of the normal law).
    expect(quantile?.signal.single).toBeCloseTo(
      (signal.single! * Math.cos((1.2816 * 0.05 * Math.PI) / 2) ** 2) /
        (0.5 * (1 + Math.exp(-((0.05 * Math.PI) ** 2) / 2))),
      3,
    );
    const { out: text } = await invoke(['evaluate', studyFile(FIXED + drift)]);
    expect(text).toContain('held by 80 % of the drift');
    const { out: table } = await invoke(['evaluate', studyFile(`${FIXED}drift: { area: 5 % }\n`)]);
    expect(table).toContain('mean over drift');
    expect(table).toContain('without drift');
  });

  it('names the basis over each column and gives three digits', async () => {
    const filtered = `${FIXED}collection: { filter: { fwhm: 30 GHz }, efficiency: 0.5 }\n`;
    const { out } = await invoke(['evaluate', studyFile(filtered)]);
    expect(out).toMatch(/per pulse +emitted +filtered +signal +collected/);
    expect(out).toMatch(/P\(n=1\) +0\.998 +0\.\d{3} +0\.\d{3} +0\.\d{3}/);
    expect(out).toContain('phonons      none');
  });

  it('lists free parameters and how to set them', async () => {
    const path = studyFile(FREE);
    const { code, err } = await invoke(['evaluate', path]);
    expect(code).toBe(2);
    expect(err).toContain('pulse.tones.0.fwhm: from 3.00 ps to 12.0 ps, logarithmic');
    const advice = [...err.matchAll(/--set "([^"]+)"/g)].map((match) => match[1]);
    expect(advice).toHaveLength(2);
    const followed = await invoke(['evaluate', path, ...advice.flatMap((set) => ['--set', set])]);
    expect(followed.code).toBe(0);
  });

  it('refuses a faulty --set as it refuses a faulty file', async () => {
    const { code, err } = await invoke(['evaluate', studyFile(FIXED), '--set', 'pulse.tones.0.area=1 THz']);
    expect(code).toBe(2);
    expect(err).toContain('pulse.tones.0.area');
    expect(err).toContain('needs a pulse area');
  });

  it('writes envelope and populations against time', async () => {
    const target = join(freshFolder(), 'trace.csv');
    expect((await invoke(['evaluate', studyFile(FIXED), '--trace', target])).code).toBe(0);
    const [head, ...rows] = csvCells(readFileSync(target, 'utf8'));
    expect(head).toEqual([
      'time [ps]',
      'drive.re [1/ps]',
      'drive.im [1/ps]',
      'populations.g',
      'populations.x',
    ]);
    const numbers = rows.map((row) => row.map(Number));
    // The trapezoidal sum over the envelope is the area, π.
    const area = numbers
      .slice(1)
      .reduce((sum, row, i) => sum + ((row[0] - numbers[i][0]) * (row[1] + numbers[i][1])) / 2, 0);
    expect(area).toBeCloseTo(Math.PI, 2);
    for (const [, , , g, x] of numbers) expect(g + x).toBeCloseTo(1, 9);
    const bad = await invoke(['evaluate', studyFile(FIXED), '--trace', '/nowhere/at/all.csv']);
    expect(bad.code).toBe(2);
    expect(bad.err).toContain('/nowhere/at/all.csv: no such file or directory');
  });

  it('names the phonon method beside the figures', async () => {
    const text = FIXED.replace(
      '930 nm }',
      '930 nm, phonons: { coupling: 0.03 ps^2, cutoff: 2.2 1/ps, temperature: 4 K } }',
    );
    const { code, out } = await invoke(['evaluate', studyFile(text)]);
    expect(code).toBe(0);
    expect(out).toMatch(/phonons +polaron/);
    expect(out).toContain('auto: polaron');
  });
});
