import { spawn } from 'node:child_process';
import { readdirSync, readFileSync } from 'node:fs';
import { loadavg } from 'node:os';
import { join, resolve } from 'node:path';
import { setTimeout } from 'node:timers/promises';

const bin = resolve('bin/pulsewright.js');
const STARTERS = resolve('cli/study/starters');

/** How a run of the built command went. */
export interface Ended {
  readonly code: number | null;
  /** Wall time, s. */
  readonly wall: number;
  /** Processor time of all its threads, s; null for a run that was killed. */
  readonly cpu: number | null;
}

/** Has the process tell its processor time when it ends. */
const TELL_TIME = `data:text/javascript,process.on('exit',()=>{const{userCPUTime:u,systemCPUTime:s}=process.resourceUsage();process.channel&&process.send((u+s)/1e6)})`;

/**
 * One `optimize` of the built command.
 * @param options for Node itself
 * @param killAfter SIGKILL after so many milliseconds; null for never
 */
export async function optimize(
  study: string,
  out: string,
  flags: readonly string[],
  options: readonly string[] = [],
  killAfter: number | null = null,
): Promise<Ended> {
  const argv = ['--import', TELL_TIME, ...options, bin, 'optimize', study, '--out', out, ...flags];
  const began = performance.now();
  const child = spawn(process.execPath, argv, { stdio: ['ignore', 'ignore', 'ignore', 'ipc'] });
  let cpu: number | null = null;
  child.on('message', (message) => {
    cpu = Number(message);
  });
  const ended = new Promise<number | null>((done) => child.on('close', (code) => done(code)));
  if (killAfter !== null) {
    const first = await Promise.race([ended.then(() => 'ended'), setTimeout(killAfter, 'late')]);
    if (first === 'late') child.kill('SIGKILL');
  }
  const code = await ended;
  return { code, wall: (performance.now() - began) / 1000, cpu };
}

/** Tables that must not depend on how a run was carried out. */
export const tablesOf = (out: string): string =>
  ['front.csv', 'archive.csv'].map((file) => readFileSync(join(out, file), 'utf8')).join('\n');

/** Names of the bundled starter studies. */
export const starterNames = (): string[] =>
  readdirSync(STARTERS)
    .map((file) => file.replace(/\.yaml$/, ''))
    .sort();

/** File of a starter study by its name; anything else is a path already. */
export const studyPath = (name: string): string =>
  starterNames().includes(name) ? join(STARTERS, `${name}.yaml`) : resolve(name);

/** Processes that wait for a processor make every time here longer. */
export const loadLine = (): string => `load ${loadavg()[0].toFixed(1)}`;
