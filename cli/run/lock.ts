import { readFileSync, unlinkSync } from 'node:fs';
import { link, open, readFile, rename, rm, writeFile } from 'node:fs/promises';
import { hostname } from 'node:os';
import { basename, dirname, join } from 'node:path';
import { fileError, UserError } from './user-error.js';

export const LOCK = 'run.lock';

/** Who works on a run directory. */
interface Holder {
  readonly pid: number;
  readonly host: string;
  /** When the process began, in the system's own measure, so that a later one with its number is told apart; null unknown. */
  readonly began: string | null;
}

/** A run directory that this process alone works on. */
export interface Lock {
  /** How it was taken, where that is worth saying. */
  readonly remarks: readonly string[];
  release(): void;
}

/** Signals that end the process. */
const ENDS = ['SIGINT', 'SIGTERM', 'SIGHUP'] as const;
/** Times that somebody else may be quicker. */
const ATTEMPTS = 5;

/** Field 22 of /proc/<pid>/stat, counted behind the name of the program, which may hold anything. */
function beganOf(pid: number): string | null {
  try {
    const text = readFileSync(`/proc/${pid}/stat`, 'utf8');
    return text.slice(text.lastIndexOf(')') + 2).split(' ')[19] ?? null;
  } catch {
    return null;
  }
}

const self = (): Holder => ({ pid: process.pid, host: hostname(), began: beganOf(process.pid) });

/** Whether the holder is a process of this host that has ended. */
function hasEnded(holder: Holder): boolean {
  if (holder.host !== hostname()) return false;
  try {
    process.kill(holder.pid, 0);
  } catch (error) {
    return (error as NodeJS.ErrnoException).code === 'ESRCH';
  }
  const now = beganOf(holder.pid);
  return holder.began !== null && now !== null && holder.began !== now;
}

function holderOf(text: string): Holder | null {
  try {
    const { pid, host, began } = JSON.parse(text) as Holder;
    const sound = Number.isSafeInteger(pid) && pid > 0 && typeof host === 'string';
    return sound ? { pid, host, began: typeof began === 'string' ? began : null } : null;
  } catch {
    return null;
  }
}

async function textOf(path: string): Promise<string | null> {
  return readFile(path, 'utf8').catch((error: NodeJS.ErrnoException) => {
    if (error.code === 'ENOENT') return null;
    throw fileError(error, path);
  });
}

const temporaryFor = (path: string) => join(dirname(path), `.${basename(path)}.${process.pid}.tmp`);

/** Puts the lock there with all its content at once; false when there is one. */
async function create(path: string, text: string): Promise<boolean> {
  const temporary = temporaryFor(path);
  try {
    const file = await open(temporary, 'w');
    try {
      await file.writeFile(text);
      await file.sync();
    } finally {
      await file.close();
    }
    // Some file systems have no hard links: there the lock is empty for a moment.
    await link(temporary, path).catch(async (error: NodeJS.ErrnoException) => {
      if (error.code === 'EEXIST') throw error;
      await writeFile(path, text, { flag: 'wx' });
    });
    return true;
  } catch (error) {
    if ((error as NodeJS.ErrnoException).code === 'EEXIST') return false;
    throw fileError(error, path);
  } finally {
    await rm(temporary, { force: true });
  }
}

/** Takes away the lock of a process that has ended. Another one may have done so meanwhile: its lock is put back. */
async function removeStale(path: string, judged: string): Promise<void> {
  const aside = temporaryFor(path);
  try {
    await rename(path, aside);
  } catch (error) {
    if ((error as NodeJS.ErrnoException).code === 'ENOENT') return;
    throw fileError(error, path);
  }
  if ((await textOf(aside)) !== judged) await link(aside, path).catch(() => undefined);
  await rm(aside, { force: true });
}

function refusal(path: string, holder: Holder | null): UserError {
  const directory = dirname(path);
  if (holder === null) {
    return new UserError(
      `${path}: cannot be read; remove it when no process of pulsewright works on ${directory}`,
    );
  }
  const { pid, host } = holder;
  const where = host === hostname() ? '' : ` on ${host}`;
  return new UserError(
    `${directory}: process ${pid}${where} works on this run; wait for it or stop it (when there is no such process: remove ${path})`,
  );
}

/** Releases the lock when the process ends by itself or by a signal; gives the way to stop listening. */
function onEnd(release: () => void): () => void {
  const ends = ENDS.map((signal) => {
    const listener = () => {
      // Whoever else listens decides what becomes of the process.
      if (process.listenerCount(signal) > 1) return;
      release();
      process.kill(process.pid, signal);
    };
    return { signal, listener };
  });
  process.on('exit', release);
  for (const { signal, listener } of ends) process.on(signal, listener);
  return () => {
    process.off('exit', release);
    for (const { signal, listener } of ends) process.off(signal, listener);
  };
}

function held(path: string, text: string, remarks: readonly string[]): Lock {
  let stop: (() => void) | null = null;
  const release = () => {
    if (stop === null) return;
    stop();
    stop = null;
    try {
      if (readFileSync(path, 'utf8') === text) unlinkSync(path);
    } catch {
      // Gone already, with its directory perhaps.
    }
  };
  stop = onEnd(release);
  return { remarks, release };
}

/**
 * Takes the lock of a run directory, which must exist and take files. The lock of a process of this host that has ended
 * is taken over, with a remark.
 * @throws UserError that names the process that holds it
 */
export async function lockRun(directory: string): Promise<Lock> {
  const path = join(directory, LOCK);
  const text = `${JSON.stringify(self())}\n`;
  const remarks: string[] = [];
  let holder: Holder | null = null;
  for (let attempt = 0; attempt < ATTEMPTS; attempt++) {
    if (await create(path, text)) return held(path, text, remarks);
    const found = await textOf(path);
    if (found === null) continue;
    holder = holderOf(found);
    if (holder === null || !hasEnded(holder)) break;
    await removeStale(path, found);
    remarks.splice(0, 1, `${path}: was left by process ${holder.pid}, which has ended; taken over`);
  }
  throw refusal(path, holder);
}
