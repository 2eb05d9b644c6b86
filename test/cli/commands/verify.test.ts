import { EventEmitter } from 'node:events';
import {
  appendFileSync,
  existsSync,
  readdirSync,
  readFileSync,
  statSync,
  truncateSync,
  writeFileSync,
} from 'node:fs';
import { join } from 'node:path';
import { beforeAll, describe, expect, it } from 'vitest';
import { csvCells, FREE, freshFolder, invoke, studyFile } from './invoke.js';

interface Point {
  readonly design: string;
  readonly holds: boolean;
  readonly reasons: readonly string[];
  readonly meets_level: boolean;
  readonly accuracy: { kept: boolean | null; stated: number | null; found: number | null };
  readonly quoted: { brightness: number };
  readonly verified: { brightness: number | null; figures: { phonons: { method: string } } | null };
  readonly relative_difference: { brightness: number };
}
interface Document {
  readonly format: string;
  readonly all_hold: boolean;
  readonly points: readonly Point[];
}

const BATH = 'phonons: { coupling: 0.03 ps^2, cutoff: 2.2 1/ps, temperature: 4 K, method: METHOD }';
/** One free parameter and two levels: a search of moments, verified by short pulses of few steps. */
const phononStudy = (method: string) => `pulsewright: 1
emitter: { model: two-level, lifetime: 300 ps, ${BATH.replace('METHOD', method)} }
pulse: { tones: [{ fwhm: 1 ps, area: { from: 0.5 pi, to: 1 pi } }] }
goal: { front: { from: 0.6, to: 0.8, points: 2 } }
search: { evaluations: 16, seed: 1 }
`;

async function finished(text: string): Promise<string> {
  const run = join(freshFolder(), 'run');
  expect((await invoke(['optimize', studyFile(text), '--out', run, '--workers', '1'])).code).toBe(0);
  return run;
}
const verified = async (run: string, ...more: string[]) => invoke(['verify', run, '--workers', '1', ...more]);
const lines = (run: string) => readFileSync(join(run, 'verify.jsonl'), 'utf8').trimEnd().split('\n');

describe('verify', () => {
  let run = '';
  beforeAll(async () => {
    run = await finished(FREE);
  });

  it('finds every point of a sound run to hold, and writes table, document and ledger', async () => {
    const { code, out } = await verified(run, '--json');
    expect(code).toBe(0);
    const document = JSON.parse(out) as Document;
    expect(document.format).toBe('pulsewright.verify/1');
    expect(document).toEqual(JSON.parse(readFileSync(join(run, 'verify.json'), 'utf8')));
    expect(document.points.length).toBe(readdirSync(join(run, 'designs')).length);
    for (const point of document.points) {
      expect(point).toMatchObject({ holds: true, reasons: [], meets_level: true });
      expect(point.accuracy.kept).toBe(true);
      expect(Math.abs(point.relative_difference.brightness)).toBeLessThan(1e-8);
    }
    const [head, ...rows] = csvCells(readFileSync(join(run, 'verify.csv'), 'utf8'));
    expect(head.slice(0, 4)).toEqual(['design', 'level', 'quoted signal.single', 'verified signal.single']);
    expect(rows.map((row) => row[head.indexOf('holds')])).toEqual(rows.map(() => 'yes'));
    const table = (await verified(run)).out;
    expect(table).toMatch(/all \d points hold/);
    expect(table).toContain('reference propagator alone');
  });

  it('goes on after an interruption or a torn line, and computes nothing twice', async () => {
    await verified(run);
    const whole = readFileSync(join(run, 'verify.json'), 'utf8');
    const [ledger, before] = [join(run, 'verify.jsonl'), lines(run)];
    truncateSync(ledger, statSync(ledger).size - 40);
    expect((await verified(run)).code).toBe(0);
    expect(lines(run)).toEqual(before);
    appendFileSync(ledger, '{"key":');
    await verified(run);
    expect(lines(run)).toEqual(before);
    expect(readFileSync(join(run, 'verify.json'), 'utf8')).toBe(whole);
    // A ledger of another version is begun anew.
    writeFileSync(
      ledger,
      [before[0].replace(/"version":"[^"]*"/, '"version":"0.0.0"'), before[1], ''].join('\n'),
    );
    await verified(run);
    expect(lines(run)).toEqual(before);
  });

  it('gives the same document on two worker threads', async () => {
    await verified(run);
    const serial = readFileSync(join(run, 'verify.json'), 'utf8');
    writeFileSync(join(run, 'verify.jsonl'), '');
    expect((await invoke(['verify', run, '--workers', '2'])).code).toBe(0);
    expect(readFileSync(join(run, 'verify.json'), 'utf8')).toBe(serial);
  });

  it('stops on SIGINT with what is finished on disk and says how to go on', async () => {
    const signals = new EventEmitter();
    writeFileSync(join(run, 'verify.jsonl'), '');
    const pending = invoke(['verify', run, '--workers', '1'], signals);
    while (!existsSync(join(run, 'verify.jsonl')) || lines(run).length < 2) {
      await new Promise((resume) => setImmediate(resume));
    }
    signals.emit('SIGINT');
    const { code, err } = await pending;
    expect(code).toBe(130);
    expect(err).toContain(`go on with: pulsewright verify ${run}`);
    expect((await verified(run)).code).toBe(0);
  });

  it('names points whose quoted figures do not stand, exit code 1', async () => {
    const broken = await finished(FREE.replace('seed: 5', 'seed: 6'));
    const path = join(broken, 'front.json');
    const front = JSON.parse(readFileSync(path, 'utf8'));
    front.points[0].figures.signal.single *= 1 + 1e-4;
    front.points[0].figures.emitted.p[1] += 1e-4;
    front.points[1].level = front.points[1].figures.signal.single * 1.01;
    writeFileSync(path, JSON.stringify(front));
    const { code, out } = await verified(broken, '--json');
    expect(code).toBe(1);
    const { all_hold, points } = JSON.parse(out) as Document;
    expect(all_hold).toBe(false);
    expect(points.map(({ holds }) => holds).indexOf(true)).toBe(2);
    expect(points[0].accuracy.kept).toBe(false);
    expect(points[0].reasons[0]).toMatch(/relative difference of a figure is 1\.0e-1; stated was 1\.0e-6/);
    expect(points[1].reasons[0]).toMatch(/^signal\.single is [\d.]+; the level is/);
    expect((await verified(broken)).out).toMatch(/2 of \d points do not hold:\n {2}designs\/01\.yaml: /);
  });

  it('holds a front that the exact phonon method corrected against a larger size of it', async () => {
    const { points } = JSON.parse(
      (await verified(await finished(phononStudy('auto')), '--json')).out,
    ) as Document;
    for (const { verified: after, accuracy, relative_difference } of points) {
      expect(after.figures?.phonons.method).toBe('exact');
      // Really another evaluation, and as near as it says.
      expect(Math.abs(relative_difference.brightness)).toBeGreaterThan(1e-7);
      expect(accuracy.kept).toBe(true);
      expect(accuracy.stated).toBeLessThan(2e-3);
    }
  });

  it('refuses what is no finished run of the study beside it, exit code 2', async () => {
    const empty = freshFolder();
    const nothing = await verified(empty);
    expect(nothing.code).toBe(2);
    expect(nothing.err).toContain('holds no finished run');
    expect(readdirSync(empty)).toEqual([]);
    const other = await finished(FREE.replace('seed: 5', 'seed: 7'));
    writeFileSync(join(other, 'study.yaml'), FREE);
    const swapped = await verified(other);
    expect(swapped.code).toBe(2);
    expect(swapped.err).toContain('is not the study that front.json was made from');
  });

  it('leaves files that a new run counts as its own', async () => {
    await verified(run);
    const study = join(run, 'study.yaml');
    const again = await invoke(['optimize', study, '--out', run, '--resume', '--workers', '1']);
    expect(again.code).toBe(0);
    // Without its ledger the directory holds only files of ours: it counts as empty.
    truncateSync(join(run, 'ledger.jsonl'), 0);
    expect((await invoke(['optimize', study, '--out', run, '--resume', '--workers', '1'])).code).toBe(0);
    expect(existsSync(join(run, 'verify.json'))).toBe(false);
  });
});
