import { existsSync, readFileSync } from 'node:fs';
import { join } from 'node:path';
import { setTimeout } from 'node:timers/promises';
import { describe, expect, it } from 'vitest';
import { stream } from '../../../core/index.js';
import { freshFolder, studyFile } from '../commands/invoke.js';
import { start } from './process.js';

/** The long form takes minutes: `npm run test:kill`. */
const LONG = process.env['PULSEWRIGHT_KILLS'];
const KILLS = LONG === undefined ? 3 : Number(LONG);
const EVALUATIONS = LONG === undefined ? 500 : 4000;
const SEED = 20260101;

const STUDY = `pulsewright: 1
title: To be killed
emitter: { model: two-level, lifetime: 300 ps }
pulse:
  tones:
    - fwhm: { from: 3 ps, to: 30 ps, scale: log }
      area: { from: 0.3 pi, to: 3 pi }
      detuning: { from: -0.2 meV, to: 0.2 meV }
collection: { efficiency: 0.8 }
goal: { at_least: 0.6, front: { from: 0.3, to: 0.7, points: 9 } }
search: { evaluations: ${EVALUATIONS}, seed: 11 }
`;

const table = (directory: string, name: string) => readFileSync(join(directory, name), 'utf8');

async function waitForLedger(directory: string, lines: number): Promise<void> {
  const path = join(directory, 'ledger.jsonl');
  for (let i = 0; i < 600; i++) {
    if (existsSync(path) && readFileSync(path, 'utf8').split('\n').length > lines) return;
    await setTimeout(20);
  }
  throw new Error(`${path} did not grow to ${lines} lines`);
}

/** One uninterrupted run that all others are compared with. */
const reference = (() => {
  let run: Promise<string> | null = null;
  return () => {
    run ??= (async () => {
      const directory = freshFolder();
      const { code, err } = await start(['optimize', studyFile(STUDY), '--out', directory, '--workers', '1'])
        .ended;
      expect(err).toBe('');
      expect(code).toBe(0);
      return directory;
    })();
    return run;
  };
})();

async function expectSame(directory: string): Promise<void> {
  for (const name of ['front.csv', 'archive.csv']) {
    expect(table(directory, name) === table(await reference(), name), name).toBe(true);
  }
}

describe('interruptions', () => {
  it('gives the same bytes with two workers as with one', { timeout: 600_000 }, async () => {
    const directory = freshFolder();
    const { code } = await start(['optimize', studyFile(STUDY), '--out', directory, '--workers', '2']).ended;
    expect(code).toBe(0);
    await expectSame(directory);
  });

  it('stops cleanly on SIGINT, says how to go on, and goes on', { timeout: 600_000 }, async () => {
    const directory = freshFolder();
    const study = studyFile(STUDY);
    const { child, ended } = start(['optimize', study, '--out', directory, '--workers', '2']);
    await waitForLedger(directory, 2);
    child.kill('SIGINT');
    const { code, err, out } = await ended;
    expect(code).toBe(130);
    expect(out).toBe('');
    const advice = `pulsewright optimize ${study} --out ${directory} --resume`;
    expect(err).toContain(advice);
    expect(table(directory, 'ledger.jsonl').endsWith('\n')).toBe(true);
    const resumed = await start(advice.split(' ').slice(1)).ended;
    expect(resumed.code).toBe(0);
    await expectSame(directory);
  });

  it(`gives the same bytes after ${KILLS} SIGKILLs at random moments`, { timeout: 3_600_000 }, async () => {
    const random = stream(SEED, 0);
    const directory = freshFolder();
    const argv = ['optimize', studyFile(STUDY), '--out', directory];
    let killed = 0;
    let early = 0;
    while (killed < KILLS) {
      const workers = String(1 + (killed % 2));
      const { child, ended } = start([...argv, '--workers', workers, '--resume']);
      const timer = setTimeout(150 + 1800 * random.next());
      await Promise.race([timer, ended]);
      child.kill('SIGKILL');
      const { signal } = await ended;
      if (signal !== 'SIGKILL') early++;
      killed++;
    }
    const { code, err } = await start([...argv, '--resume']).ended;
    expect(err).not.toContain('damaged');
    expect(code).toBe(0);
    expect(early).toBeLessThan(KILLS);
    await expectSame(directory);
  });
});
