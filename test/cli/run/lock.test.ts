import { spawn } from 'node:child_process';
import { existsSync, readdirSync, readFileSync, writeFileSync } from 'node:fs';
import { hostname } from 'node:os';
import { join } from 'node:path';
import { setTimeout } from 'node:timers/promises';
import { describe, expect, it } from 'vitest';
import { openRun } from '../../../cli/run/directory.js';
import { LEDGER_FORMAT } from '../../../cli/run/ledger-format.js';
import { LOCK, lockRun } from '../../../cli/run/lock.js';
import { freshFolder, studyFile } from '../commands/invoke.js';
import { type Ended, start } from './process.js';

const lockOf = (holder: object) => `${JSON.stringify({ host: hostname(), began: null, ...holder })}\n`;

/** A run of minutes. */
const LONG = `pulsewright: 1
emitter: { model: two-level, lifetime: 300 ps }
pulse:
  tones:
    - fwhm: { from: 3 ps, to: 30 ps, scale: log }
      area: { from: 0.3 pi, to: 3 pi }
      detuning: { from: -0.2 meV, to: 0.2 meV }
search: { evaluations: 200000 }
`;

async function appears(path: string): Promise<void> {
  for (let i = 0; i < 1500 && !existsSync(path); i++) await setTimeout(20);
}

/** The process that holds the lock. */
function holder(directory: string): number | null {
  const path = join(directory, LOCK);
  return existsSync(path) ? (JSON.parse(readFileSync(path, 'utf8')) as { pid: number }).pid : null;
}

/** The number of a process that has just ended. */
async function endedProcess(): Promise<number> {
  const child = spawn(process.execPath, ['--version'], { stdio: 'ignore' });
  await new Promise((done) => child.on('exit', done));
  return child.pid!;
}

describe('lock of a run directory', () => {
  it('keeps others out until it is released, and leaves nothing', async () => {
    const directory = freshFolder();
    const lock = await lockRun(directory);
    await expect(lockRun(directory)).rejects.toThrow(`process ${process.pid} works on this run`);
    expect(readdirSync(directory)).toEqual([LOCK]);
    lock.release();
    lock.release();
    expect(readdirSync(directory)).toEqual([]);
    (await lockRun(directory)).release();
  });

  it('is given to one of many that ask at once, though a dead one had it', { timeout: 120_000 }, async () => {
    const directory = freshFolder();
    writeFileSync(join(directory, LOCK), lockOf({ pid: await endedProcess() }));
    const argv = ['optimize', studyFile(LONG), '--out', directory, '--workers', '1'];
    const runs = Array.from({ length: 4 }, () => start(argv));
    const refused: Ended[] = [];
    await new Promise<void>((done) => {
      for (const { ended } of runs) {
        void ended.then((end) => {
          refused.push(end);
          if (refused.length === runs.length - 1) done();
        });
      }
    });
    for (const { code, err } of refused) {
      expect(code).toBe(2);
      expect(err).toMatch(/process \d+ works on this run/);
    }
    const winner = runs.find(({ child }) => child.pid === holder(directory));
    expect(winner?.child.exitCode).toBeNull();
    winner?.child.kill('SIGKILL');
    await winner?.ended;
  });

  it.each([
    ['SIGINT', 130, null],
    ['SIGTERM', null, 'SIGTERM'],
    ['SIGHUP', null, 'SIGHUP'],
  ] as const)('is released on %s', { timeout: 120_000 }, async (name, code, signal) => {
    const directory = freshFolder();
    const { child, ended } = start(['optimize', studyFile(LONG), '--out', directory]);
    await appears(join(directory, 'study.yaml'));
    expect(existsSync(join(directory, LOCK))).toBe(true);
    child.kill(name);
    expect(await ended).toMatchObject({ code, signal });
    expect(existsSync(join(directory, LOCK))).toBe(false);
  });

  it('that a killed run left does not keep it from going on', { timeout: 120_000 }, async () => {
    const directory = freshFolder();
    const argv = ['optimize', studyFile(LONG), '--out', directory, '--resume'];
    const { child, ended } = start(argv);
    await appears(join(directory, 'study.yaml'));
    child.kill('SIGKILL');
    await ended;
    expect(existsSync(join(directory, LOCK))).toBe(true);
    const next = start(argv);
    await new Promise<void>((done) => next.child.stderr?.once('data', () => done()));
    next.child.kill('SIGINT');
    const { code, err } = await next.ended;
    expect(err).toContain(`was left by process ${child.pid}, which has ended; taken over`);
    expect(code).toBe(130);
  });

  it('is taken over from a process that has ended, with a remark', async () => {
    const directory = freshFolder();
    const pid = await endedProcess();
    writeFileSync(join(directory, LOCK), lockOf({ pid }));
    const lock = await lockRun(directory);
    expect(lock.remarks).toEqual([expect.stringContaining(`process ${pid}, which has ended; taken over`)]);
    lock.release();
  });

  it('is taken over from an earlier process with the number of a living one', async () => {
    const directory = freshFolder();
    writeFileSync(join(directory, LOCK), lockOf({ pid: process.pid, began: '1' }));
    const lock = await lockRun(directory);
    expect(lock.remarks).toHaveLength(1);
    lock.release();
  });

  it.each([
    ['another host', { pid: 1, host: 'elsewhere' }, 'process 1 on elsewhere works on this run'],
    ['a living process', { pid: process.ppid }, `process ${process.ppid} works on this run`],
  ])('is not taken from %s', async (_, holder, message) => {
    const directory = freshFolder();
    writeFileSync(join(directory, LOCK), lockOf(holder));
    await expect(lockRun(directory)).rejects.toThrow(message);
    expect(readFileSync(join(directory, LOCK), 'utf8')).toBe(lockOf(holder));
  });

  it('that nobody can read is left alone, and named', async () => {
    const directory = freshFolder();
    writeFileSync(join(directory, LOCK), 'torn');
    await expect(lockRun(directory)).rejects.toThrow(`${join(directory, LOCK)}: cannot be read; remove it`);
  });

  it('is released where the directory is refused, and counts as ours', async () => {
    const header = { format: LEDGER_FORMAT, study: 'abc', version: '1.0.0', seed: 7 };
    const request = { directory: freshFolder(), resume: false, header, study: Buffer.from('a') };
    const run = await openRun(request);
    await expect(openRun({ ...request, resume: true })).rejects.toThrow('works on this run');
    await run.close();
    await expect(openRun(request)).rejects.toThrow('--resume');
    expect(existsSync(join(request.directory, LOCK))).toBe(false);
  });
});
