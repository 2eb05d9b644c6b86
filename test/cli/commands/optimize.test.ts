import { EventEmitter } from 'node:events';
import { readdirSync, readFileSync, rmSync, truncateSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { describe, expect, it } from 'vitest';
import type { Figures } from '../../../core/index.js';
import { csvCells, FIXED, FREE, freshFolder, invoke, studyFile } from './invoke.js';

const read = (folder: string, name: string) => readFileSync(join(folder, name), 'utf8');
const contents = (folder: string) =>
  Object.fromEntries(
    ['front.csv', 'archive.csv', 'front.json', 'front.svg', 'ledger.jsonl'].map((name) => [
      name,
      read(folder, name),
    ]),
  );

/** One finished run of the two-parameter study that several tests look at. */
const finished = (() => {
  let run: Promise<{ study: string; folder: string; out: string; code: number; err: string }> | null = null;
  return () => {
    run ??= (async () => {
      const study = studyFile(FREE);
      const folder = freshFolder();
      return { study, folder, ...(await invoke(['optimize', study, '--out', folder, '--workers', '1'])) };
    })();
    return run;
  };
})();

describe('optimize', () => {
  it('writes every file of a run and a table that says what it is', async () => {
    const { folder, code, out, err } = await finished();
    expect(code).toBe(0);
    expect(err).toBe('');
    expect(readdirSync(folder).sort()).toEqual(
      'archive.csv designs front.csv front.json front.svg ledger.jsonl study.yaml'.split(' '),
    );
    expect(out).toMatch(/design +level +P\(n=1\) +P\(n≥2\) +g⁽²⁾\[0\] +tone 0 +tone 0/);
    expect(out).toMatch(/signal +collected +collected +fwhm +area/);
    expect(out).toContain('best design at signal P(n=1) ≥ 0.7');
    expect(out).toContain(`files: ${folder}/front.csv`);
    expect(read(folder, 'study.yaml')).toBe(FREE);
  });

  it('names columns by figure paths and parameters with unit; brightness and impurity rise together', async () => {
    const { folder } = await finished();
    const [head, ...rows] = csvCells(read(folder, 'front.csv'));
    expect(head.slice(0, 4)).toEqual([
      'level',
      'design',
      'pulse.tones.0.fwhm [ps]',
      'pulse.tones.0.area [pi]',
    ]);
    const column = (name: string) => rows.map((row) => Number(row[head.indexOf(name)]));
    const [brightness, impurity, level] = ['signal.single', 'collected.multiphoton', 'level'].map(column);
    expect(rows.length).toBeGreaterThanOrEqual(4);
    for (let i = 0; i < rows.length; i++) {
      expect(brightness[i]).toBeGreaterThanOrEqual(level[i] * (1 - 1e-6));
      if (i > 0) expect(brightness[i]).toBeGreaterThan(brightness[i - 1]);
      if (i > 0) expect(impurity[i]).toBeGreaterThan(impurity[i - 1]);
      expect(column('accuracy.error_estimate')[i]).toBeLessThanOrEqual(1e-6);
    }
    const comments = read(folder, 'archive.csv')
      .split('\n')
      .filter((line) => line.startsWith('#'));
    expect(comments[0]).toBe('# pulsewright.archive/1');
    expect(comments.join('\n')).toContain('accuracy search');
    const [, ...archive] = csvCells(read(folder, 'archive.csv'));
    expect(archive.length).toBeGreaterThan(rows.length);
  });

  it('leaves designs that evaluate to the figures of the front', async () => {
    const { folder } = await finished();
    const [head, ...rows] = csvCells(read(folder, 'front.csv'));
    for (const row of [rows[0], rows[rows.length - 1]]) {
      const { code, out } = await invoke(['evaluate', join(folder, row[1]), '--json']);
      expect(code).toBe(0);
      const figures = JSON.parse(out) as Figures;
      expect(figures.collected.multiphoton).toBe(Number(row[head.indexOf('collected.multiphoton')]));
      expect(figures.signal.single).toBe(Number(row[head.indexOf('signal.single')]));
    }
    const best = JSON.parse(
      (await invoke(['evaluate', join(folder, 'designs/best.yaml'), '--json'])).out,
    ) as Figures;
    expect(best.signal.single).toBeGreaterThanOrEqual(0.7 * (1 - 1e-6));
  });

  it('tells evaluations, time and what the hypervolume refers to in front.json, and prints it with --json', async () => {
    const { folder } = await finished();
    const document = JSON.parse(read(folder, 'front.json')) as {
      format: string;
      evaluations: number;
      wall_time_s: number;
      hypervolume: { value: number; meaning: string };
      points: { design: string }[];
    };
    expect(document.format).toBe('pulsewright.front/1');
    expect(Number.isInteger(document.evaluations) && document.evaluations <= 80).toBe(true);
    expect(document.wall_time_s).toBeGreaterThan(0);
    expect(document.hypervolume.value).toBeGreaterThan(0);
    expect(document.hypervolume.meaning).toContain('signal.single');
    const files = readdirSync(join(folder, 'designs')).sort();
    expect(files).toEqual([
      ...document.points.map(({ design }) => design.replace('designs/', '')),
      'best.yaml',
    ]);
    const again = await invoke([
      'optimize',
      (await finished()).study,
      '--out',
      folder,
      '--resume',
      '--json',
      '--workers',
      '1',
    ]);
    expect(again.out).toBe(read(folder, 'front.json'));
  });

  it('gives the same bytes when a finished run is resumed, and after its last lines were lost', async () => {
    const { folder, study } = await finished();
    const before = contents(folder);
    const argv = ['optimize', study, '--out', folder, '--resume', '--workers', '1'];
    expect((await invoke(argv)).code).toBe(0);
    expect(contents(folder)).toEqual(before);
    truncateSync(join(folder, 'ledger.jsonl'), Math.floor(before['ledger.jsonl'].length / 2));
    rmSync(join(folder, 'front.csv'));
    expect((await invoke(argv)).code).toBe(0);
    expect(read(folder, 'front.csv')).toBe(before['front.csv']);
    expect(read(folder, 'archive.csv')).toBe(before['archive.csv']);
  });

  it('refuses the run of another study, and a second run in the same place', async () => {
    const { folder, study } = await finished();
    const before = contents(folder);
    const other = studyFile(FREE.replace('300 ps', '310 ps'));
    const refused = await invoke(['optimize', other, '--out', folder, '--resume']);
    expect(refused.code).toBe(2);
    expect(refused.err).toMatch(/was begun with study [0-9a-f]{64}; this is study [0-9a-f]{64}/);
    const second = await invoke(['optimize', study, '--out', folder]);
    expect(second.code).toBe(2);
    expect(second.err).toContain('--resume');
    expect(contents(folder)).toEqual(before);
  });

  it('gives the bias of every design of a tuned dot', async () => {
    const folder = freshFolder();
    const tuning = 'tuning: { slope: 5 ueV/mV, bias: 200 mV, range: [190 mV, 260 mV] }';
    const text = FREE.replace('lifetime', `${tuning}, lifetime`).replace(
      'fwhm: { from: 3 ps, to: 12 ps, scale: log }',
      'fwhm: 5 ps\n      detuning: { from: -1 meV, to: 1 meV }',
    );
    const { out, err } = await invoke(['optimize', studyFile(text), '--out', folder, '--workers', '1']);
    expect(err).toContain('narrowed to -300 ueV to 50 ueV');
    expect(out).toMatch(/bias/);
    for (const name of ['front.csv', 'archive.csv']) {
      const [head, ...rows] = csvCells(read(folder, name));
      const [bias, detuning] = [head.indexOf('bias [mV]'), head.indexOf('pulse.tones.0.detuning [meV]')];
      expect(rows.length).toBeGreaterThan(0);
      for (const row of rows) {
        expect(Number(row[bias])).toBeCloseTo(200 - Number(row[detuning]) / 0.005, 9);
        expect(Number(row[bias])).toBeGreaterThan(190 - 1e-9);
        expect(Number(row[bias])).toBeLessThan(260 + 1e-9);
      }
    }
    const document = JSON.parse(read(folder, 'front.json')) as {
      points: { bias_mv: number; design: string }[];
    };
    for (const { bias_mv, design } of document.points) {
      const { out: again } = await invoke(['evaluate', join(folder, design), '--json']);
      expect((JSON.parse(again) as { bias_mv: number }).bias_mv).toBe(bias_mv);
    }
  });

  it('makes a front of one point from a fixed design', async () => {
    const folder = freshFolder();
    const { code } = await invoke(['optimize', studyFile(FIXED), '--out', folder, '--workers', '1']);
    expect(code).toBe(0);
    const [head, ...rows] = csvCells(read(folder, 'front.csv'));
    expect(rows).toHaveLength(1);
    expect(Number(rows[0][head.indexOf('signal.single')])).toBeCloseTo(0.9978, 4);
  });

  it('names levels out of reach and exits 1', async () => {
    const folder = freshFolder();
    const text = FREE.replace('to: 1.4 pi', 'to: 0.5 pi').replace(
      '0.7, front: { from: 0.4',
      '0.9, front: { from: 0.2',
    );
    const { code, out } = await invoke(['optimize', studyFile(text), '--out', folder, '--workers', '1']);
    expect(code).toBe(1);
    expect(out).toContain('best design at signal P(n=1) ≥ 0.9: out of reach');
    expect(out).toMatch(/brightness levels out of reach: 0\.\d+, .*0\.900/);
    expect(read(folder, 'front.csv')).toMatch(/^# out of reach: .*0\.9$/m);
    expect(readdirSync(join(folder, 'designs'))).not.toContain('best.yaml');
  });

  it('says before any work that a goal lies above the efficiency', async () => {
    const folder = join(freshFolder(), 'new');
    const text = `${FREE}collection: { efficiency: 0.5 }\n`;
    const { code, err } = await invoke(['optimize', studyFile(text), '--out', folder]);
    expect(code).toBe(2);
    expect(err).toMatch(/study\.yaml:8:\d+ goal\.at_least/);
    expect(readdirSync(join(folder, '..'))).toEqual([]);
  });

  it('says before any work that the directory is not empty', async () => {
    const folder = freshFolder();
    writeFileSync(join(folder, 'notes.txt'), '');
    const { code, err } = await invoke(['optimize', studyFile(FREE), '--out', folder]);
    expect(code).toBe(2);
    expect(err).toContain('is not empty (notes.txt)');
    expect(readdirSync(folder)).toEqual(['notes.txt']);
  });

  it('stops on SIGINT with what is finished in the ledger, and goes on to the same front', async () => {
    const { folder: whole } = await finished();
    const folder = freshFolder();
    const study = studyFile(FREE);
    const signals = new EventEmitter();
    const argv = ['optimize', study, '--out', folder, '--workers', '1'];
    const running = invoke(argv, signals);
    while (signals.listenerCount('SIGINT') === 0) await new Promise((resume) => setImmediate(resume));
    signals.emit('SIGINT');
    const { code, err } = await running;
    expect(code).toBe(130);
    expect(err).toContain('--resume');
    expect(signals.listenerCount('SIGINT')).toBe(0);
    expect((await invoke([...argv, '--resume'])).code).toBe(0);
    expect(read(folder, 'front.csv')).toBe(read(whole, 'front.csv'));
  });
});
