import { type ChildProcess, spawn } from 'node:child_process';
import { existsSync } from 'node:fs';
import { dirname, join, resolve } from 'node:path';
import { fileURLToPath } from 'node:url';

const root = resolve(dirname(fileURLToPath(import.meta.url)), '..', '..', '..');

export interface Ended {
  readonly code: number | null;
  readonly signal: NodeJS.Signals | null;
  readonly out: string;
  readonly err: string;
}

/** Starts the built command. */
export function start(argv: readonly string[]): { child: ChildProcess; ended: Promise<Ended> } {
  if (!existsSync(join(root, 'dist', 'cli', 'main.js'))) throw new Error('build first: npm run build');
  const child = spawn(process.execPath, [join(root, 'bin', 'pulsewright.js'), ...argv], {
    stdio: ['ignore', 'pipe', 'pipe'],
  });
  let out = '';
  let err = '';
  child.stdout?.on('data', (chunk) => {
    out += String(chunk);
  });
  child.stderr?.on('data', (chunk) => {
    err += String(chunk);
  });
  const ended = new Promise<Ended>((done) => {
    child.on('close', (code, signal) => done({ code, signal, out, err }));
  });
  return { child, ended };
}
