/**
 * Runs every starter study to its end and proves that its tables do not depend on how it was run:
 * one worker, two workers, and a run that is killed at random moments and resumed must write the same bytes.
 * Usage: npm run bench:starters [-- name,name] (PULSEWRIGHT_KILLS sets the number of kills, 20 unless given).
 */
import { spawn } from 'node:child_process';
import { existsSync, mkdtempSync, readdirSync, readFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join, resolve } from 'node:path';
import { setTimeout } from 'node:timers/promises';
import { stream } from '../core/index.js';

const bin = resolve('bin/pulsewright.js');
const starters = resolve('cli/study/starters');
const kills = Number(process.env['PULSEWRIGHT_KILLS'] ?? 20);
const wanted = process.argv[2]?.split(',');
const names = readdirSync(starters)
  .map((f) => f.replace(/\.yaml$/, ''))
  .filter((n) => !wanted || wanted.includes(n));

interface Run {
  readonly code: number | null;
  readonly seconds: number;
}

/** One `optimize`, killed with SIGKILL after `killAfter` ms unless that is null. */
async function optimize(name: string, out: string, flags: string[], killAfter: number | null): Promise<Run> {
  const started = performance.now();
  const child = spawn(
    process.execPath,
    [bin, 'optimize', join(starters, `${name}.yaml`), '--out', out, ...flags],
    {
      stdio: 'ignore',
    },
  );
  const ended = new Promise<number | null>((done) => {
    child.on('exit', (code) => done(code));
  });
  if (killAfter !== null) {
    const first = await Promise.race([ended.then(() => 'ended'), setTimeout(killAfter, 'late')]);
    if (first === 'late') child.kill('SIGKILL');
  }
  return { code: await ended, seconds: (performance.now() - started) / 1000 };
}

const tables = (out: string): string =>
  ['front.csv', 'archive.csv'].map((f) => readFileSync(join(out, f), 'utf8')).join('\n');

console.log(
  '| starter | points | hypervolume | evaluations | 1 worker | 2 workers | 2 workers same bytes | kills | killed same bytes |',
);
console.log('| --- | --- | --- | --- | --- | --- | --- | --- | --- |');
let failures = 0;
for (const name of names) {
  const root = mkdtempSync(join(tmpdir(), 'pulsewright-starters-'));
  const [one, two, killed] = ['one', 'two', 'killed'].map((d) => join(root, d));
  const single = await optimize(name, one, ['--workers', '1'], null);
  const double = await optimize(name, two, ['--workers', '2'], null);
  const random = stream(2026, names.indexOf(name));
  let done = 0;
  for (let k = 0; k < kills; k++) {
    const flags = [
      '--workers',
      String(1 + (k % 2)),
      ...(existsSync(join(killed, 'ledger.jsonl')) ? ['--resume'] : []),
    ];
    // Mostly early in what is left, so that all kills find a run to kill.
    const after = 300 + random.next() * ((2 * double.seconds * 1000) / kills);
    const run = await optimize(name, killed, flags, after);
    if (run.code === null) done++;
    else break;
  }
  const last = await optimize(name, killed, ['--workers', '2', '--resume'], null);
  const front = JSON.parse(readFileSync(join(two, 'front.json'), 'utf8')) as {
    points: unknown[];
    evaluations: number;
    hypervolume: { value: number };
  };
  const sameTwo = tables(one) === tables(two);
  const sameKilled = tables(one) === tables(killed);
  const codes = [single, double, last].map((r) => r.code);
  if (!sameTwo || !sameKilled || codes.some((c) => c !== 0)) failures++;
  console.log(
    `| ${name} | ${front.points.length} | ${front.hypervolume.value.toExponential(4)} | ${front.evaluations} | ${single.seconds.toFixed(0)} s | ${double.seconds.toFixed(0)} s | ${sameTwo} | ${done} | ${sameKilled} | exit codes ${codes.join(' ')}`,
  );
}
process.exitCode = failures === 0 ? 0 : 1;
