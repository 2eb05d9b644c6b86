import { EventEmitter } from 'node:events';
import { mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { PassThrough, Writable } from 'node:stream';
import { afterAll } from 'vitest';
import { main } from '../../../cli/main.js';

class Collector extends Writable {
  text = '';
  override _write(chunk: Buffer, _encoding: string, done: () => void): void {
    this.text += chunk.toString('utf8');
    done();
  }
}

export interface Outcome {
  readonly code: number;
  readonly out: string;
  readonly err: string;
}

/** Runs a command line in this process with streams that are no terminal. */
export async function invoke(argv: readonly string[], signals = new EventEmitter()): Promise<Outcome> {
  const stdout = new Collector();
  const stderr = new Collector();
  const code = await main(argv, { stdin: new PassThrough(), stdout, stderr, signals });
  return { code, out: stdout.text, err: stderr.text };
}

const folders: string[] = [];

/** A directory of its own, removed when the test file is over. */
export function freshFolder(): string {
  const folder = mkdtempSync(join(tmpdir(), 'pulsewright-test-'));
  folders.push(folder);
  return folder;
}

afterAll(() => {
  for (const folder of folders) rmSync(folder, { recursive: true, force: true });
});

/** Writes a study and returns its path. */
export function studyFile(text: string, folder = freshFolder()): string {
  const path = join(folder, 'study.yaml');
  writeFileSync(path, text);
  return path;
}

/** A fixed resonant π pulse of 5 ps; the measured π pulse has 5 ps and 12 fJ, so its energy is known. */
export const FIXED = `pulsewright: 1
title: Fixed pulse
emitter: { model: two-level, lifetime: 500 ps, wavelength: 930 nm }
pulse: { tones: [{ fwhm: 5 ps, area: 1 pi }] }
laser: { pi_pulse: { energy: 12 fJ, fwhm: 5 ps } }
`;

/** Two free parameters, no filter: a search takes seconds. */
export const FREE = `pulsewright: 1
title: Two free parameters
emitter: { model: two-level, lifetime: 300 ps }
pulse:
  tones:
    - fwhm: { from: 3 ps, to: 12 ps, scale: log }
      area: { from: 0.3 pi, to: 1.4 pi }
goal: { at_least: 0.7, front: { from: 0.4, to: 0.9, points: 6 } }
search: { evaluations: 80, seed: 5 }
`;

/** Data lines of a CSV without its comments: column names first. */
export function csvCells(text: string): string[][] {
  const lines = text.split('\n').filter((line) => line !== '' && !line.startsWith('#'));
  return lines.map((line) => line.split(','));
}
