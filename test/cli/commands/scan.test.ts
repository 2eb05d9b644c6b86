import { EventEmitter } from 'node:events';
import { existsSync, readFileSync } from 'node:fs';
import { join } from 'node:path';
import { PassThrough } from 'node:stream';
import { setTimeout } from 'node:timers/promises';
import { describe, expect, it } from 'vitest';
import type { Context } from '../../../cli/commands/contract.js';
import { parseOver } from '../../../cli/commands/over.js';
import { planOf, scanOf } from '../../../cli/commands/scan-points.js';
import { scanCsv } from '../../../cli/report/scan-report.js';
import { csvCells, FIXED, FREE, freshFolder, invoke, studyFile } from './invoke.js';

describe('scan', () => {
  it('writes a CSV of every figure and a picture of curves', async () => {
    const base = join(freshFolder(), 'rabi');
    const argv = [
      'scan',
      studyFile(FIXED.replace('5 ps,', '0.5 ps,')),
      '--over',
      'tones.0.area=0 pi..2 pi:9',
      '--out',
      base,
    ];
    const { code, out } = await invoke(argv);
    expect(code).toBe(0);
    expect(out).toContain(`${base}.csv, ${base}.svg`);
    const [head, ...rows] = csvCells(readFileSync(`${base}.csv`, 'utf8'));
    expect(head[0]).toBe('pulse.tones.0.area [pi]');
    const x = head.indexOf('populations.x');
    // Resonant pulse, decay negligible in 0.5 ps: sin²(Θ/2) (Allen & Eberly, Optical Resonance and Two-Level Atoms).
    rows.forEach((row, i) => {
      expect(Number(row[0])).toBeCloseTo(i / 4, 12);
      expect(Number(row[x])).toBeCloseTo(Math.sin((i * Math.PI) / 8) ** 2, 2);
    });
    const svg = readFileSync(`${base}.svg`, 'utf8');
    for (const title of ['tone 0 area (π)', 'P(n=1), signal', 'P(n≥2), collected'])
      expect(svg).toContain(title);
  });

  it('maps two parameters, the first one fastest', async () => {
    const base = join(freshFolder(), 'map');
    const over = ['--over', 'tones.0.area=0.5 pi..1 pi:2', '--over', 'tones.0.detuning=-1 meV..1 meV:3'];
    const { code } = await invoke([
      'scan',
      studyFile(FIXED),
      ...over,
      '--out',
      base,
      '--accuracy',
      'search',
      '--figure',
      'emitted.g2',
    ]);
    expect(code).toBe(0);
    const [head, ...rows] = csvCells(readFileSync(`${base}.csv`, 'utf8'));
    expect(head.slice(0, 2)).toEqual(['pulse.tones.0.area [pi]', 'pulse.tones.0.detuning [meV]']);
    expect(rows.map((row) => row.slice(0, 2).map(Number))).toEqual(
      [-1, 0, 1].flatMap((detuning) => [0.5, 1].map((area) => [area, detuning])),
    );
    const svg = readFileSync(`${base}.svg`, 'utf8');
    for (const text of ['tone 0 detuning (meV)', 'g⁽²⁾[0], emitted', 'gradient']) expect(svg).toContain(text);
  });

  it('prints JSON without writing files unless asked', async () => {
    const { code, out } = await invoke([
      'scan',
      studyFile(FIXED),
      '--over',
      'emitter.lifetime=100 ps..1 ns:3:log',
      '--json',
    ]);
    expect(code).toBe(0);
    const document = JSON.parse(out) as { format: string; points: { parameters: object; figures: object }[] };
    expect(document.format).toBe('pulsewright.scan/1');
    const lifetimes = document.points.map(({ parameters }) => Object.values(parameters)[0] as number);
    expect(lifetimes[1] / Math.sqrt(1e5)).toBeCloseTo(1, 12);
    expect(existsSync('study-scan.csv')).toBe(false);
  });

  it('steps several parameters together', async () => {
    const base = join(freshFolder(), 'line');
    const argv = [
      ...['scan', studyFile(FIXED), '--out', base, '--together', '--accuracy', 'search'],
      ...['--over', 'tones.0.fwhm=2 ps..8 ps:3:log'],
      ...['--over', 'tones.0.area=1 pi..0.5 pi:3'],
      ...['--over', 'emitter.lifetime=100 ps..400 ps:3:log'],
    ];
    const { code, out } = await invoke(argv);
    expect(code).toBe(0);
    const [head, ...rows] = csvCells(readFileSync(`${base}.csv`, 'utf8'));
    expect(head.slice(0, 3)).toEqual([
      'pulse.tones.0.fwhm [ps]',
      'pulse.tones.0.area [pi]',
      'emitter.lifetime [ps]',
    ]);
    const values = rows.map((row) => row.slice(0, 3).map(Number));
    [
      [2, 1, 100],
      [4, 0.75, 200],
      [8, 0.5, 400],
    ].forEach((row, i) => {
      row.forEach((value, k) => {
        expect(values[i][k]).toBeCloseTo(value, 9);
      });
    });
    expect(out).toContain('tone 0 fwhm, tone 0 area, emitter lifetime');
    const svg = readFileSync(`${base}.svg`, 'utf8');
    expect(svg).toContain('tone 0 fwhm (ps); tone 0 area, emitter lifetime step along');
    // Each point is the design that a single evaluation has.
    const single = await invoke([
      ...['evaluate', studyFile(FIXED), '--json', '--set', 'tones.0.fwhm=8 ps'],
      ...['--set', 'tones.0.area=0.5 pi', '--set', 'emitter.lifetime=400 ps'],
    ]);
    const g2 = (JSON.parse(single.out) as { emitted: { g2: number } }).emitted.g2;
    expect(Number(rows[2][head.indexOf('emitted.g2')]) / g2).toBeCloseTo(1, 5);
  });

  it.each([
    [
      FIXED,
      ['--together', '--over', 'tones.0.area=1 pi..2 pi:3', '--over', 'tones.0.fwhm=1 ps..2 ps:4'],
      'got 4 values of pulse.tones.0.fwhm; needs 3',
    ],
    [
      FIXED,
      ['--together', '--over', 'tones.0.area=1 pi..2 pi:3', '--over', 'tones.0.fwhm=2 ps..2 ps:3'],
      'needs two different ends',
    ],
    [
      FIXED,
      ['--together', '--over', 'tones.0.area=1 pi..2 pi:3', '--over', 'tones.0.detuning=1 meV..-1 meV:3:log'],
      'got -1 meV with log; needs more than 0',
    ],
    [
      FIXED,
      ['area=1 pi..2 pi:3', 'fwhm=1 ps..2 ps:3', 'delay=1 ps..2 ps:3'].flatMap((o) => [
        '--over',
        `tones.0.${o}`,
      ]),
      'needs one or two, or --together',
    ],
    [FIXED, ['--over', 'tones.0.area=0..4:5'], 'got 0 (no unit); needs a pulse area'],
    [FIXED, ['--over', 'tones.0.aera=0 pi..4 pi:5'], 'nearest: pulse.tones.0.area'],
    [FIXED, ['--over', 'tones.1.area=0 pi..4 pi:5'], 'needs one at which a quantity of this study stands'],
    [FIXED, ['--over', 'tones.0.area=4 pi..0 pi:5'], 'needs from below to'],
    [FIXED, ['--over', 'tones.0.area=0 pi..1 pi:1'], 'got 1 values; needs 2'],
    [FIXED, ['--over', 'tones.0.area=0 pi..1 pi:3:log'], 'needs more than 0'],
    [FIXED, ['--over', 'tones.0.area'], 'needs path=from..to:count'],
    [FIXED, ['--over', 'tones.0.fwhm=-1 ps..1 ps:3'], 'needs more than 0 ps'],
    [
      FIXED,
      ['--over', 'tones.0.area=0 pi..1 pi:3', '--over', 'pulse.tones.0.area=0 pi..1 pi:3'],
      'given twice',
    ],
    [FIXED, ['--over', 'tones.0.area=0 pi..1 pi:3', '--figure', 'colected.g2'], 'nearest: collected.g2'],
    [
      FIXED,
      ['--over', 'tones.0.area=0 pi..1 pi:3', '--out', '/nowhere/scan'],
      '/nowhere: no such file or directory',
    ],
    [FREE, ['--over', 'tones.0.area=0 pi..1 pi:3'], 'pulse.tones.0.fwhm: from 3.00 ps'],
  ])('refuses %#', async (study, argv, message) => {
    const { code, err } = await invoke(['scan', studyFile(study), ...argv]);
    expect(code).toBe(2);
    expect(err).toContain(message);
  });

  it('gives the same bytes for one, two and four workers, points without figures included', async () => {
    const over = ['tones.0.area=0.5 pi..1 pi:3', 'tones.0.gdd=0 ps^2..1000000 ps^2:5'];
    const study = studyFile(FIXED.replace('1 pi }', '1 pi, tod: 1 ps^3 }'));
    const plan = await planOf({ study, over, set: [], accuracy: 'search' });
    const { signal } = new AbortController();
    const scanned = async (workers: number) => {
      const notes: string[] = [];
      const context = { streams: { stderr: new PassThrough() }, note: (text: string) => notes.push(text) };
      const scan = await scanOf(plan, [], { workers, signal, trial: 0 }, context as unknown as Context);
      return { table: scanCsv(scan!), notes };
    };
    const one = await scanned(1);
    expect(csvCells(one.table)).toHaveLength(16);
    expect(one.notes).toEqual([expect.stringContaining('no figures at point')]);
    expect(await scanned(2)).toEqual(one);
    expect(await scanned(4)).toEqual(one);
  });

  it.each(['1', '2'])('stops on SIGINT with %s workers and writes nothing', async (workers) => {
    const base = join(freshFolder(), 'long');
    const signals = new EventEmitter();
    const argv = ['scan', studyFile(FIXED), '--over', 'tones.0.area=0 pi..9 pi:20000', '--out', base];
    const pending = invoke([...argv, '--workers', workers], signals);
    while (signals.listenerCount('SIGINT') === 0) await new Promise((resume) => setImmediate(resume));
    await setTimeout(300);
    signals.emit('SIGINT');
    const { code, out, err } = await pending;
    expect(code).toBe(130);
    expect(out).toBe('');
    expect(err).toContain('stopped; nothing was written');
    expect(existsSync(`${base}.csv`)).toBe(false);
    expect(signals.listenerCount('SIGINT')).toBe(0);
  });

  it('names a point whose study has a fault, whatever thread is at work', async () => {
    const argv = ['scan', studyFile(FIXED), '--over', 'tones.0.fwhm=1 ps..5 ps:12', '--workers', '2'];
    const limited = [...argv, '--over', 'collection.efficiency=0.5..1.5:11'];
    const { code, err } = await invoke(limited);
    expect(code).toBe(2);
    expect(err).toContain('collection.efficiency: got 1.1');
    expect(err).not.toContain('internal error');
  });

  it('steps evenly, ends exact', () => {
    const over = parseOver('tones.0.detuning = -1 meV .. 2 meV:4', 1);
    expect(over.values).toEqual([-1, 0, 1, 2]);
    expect(over.texts[0]).toBe('-1 meV');
  });
});
