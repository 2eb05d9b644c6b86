import { readFile } from 'node:fs/promises';
import { join } from 'node:path';
import type { FiguresResult } from '../../optimizers/index.js';
import type { FinishedRun } from './finished-run.js';
import { Ledger } from './ledger.js';
import { type LedgerHeader, parseLines } from './ledger-format.js';
import { packageVersion } from './package.js';
import { fileError } from './user-error.js';

export const VERIFY_LEDGER_FORMAT = 'pulsewright.verify-ledger/1';
const FILE = 'verify.jsonl';

/** One verified design, by the key of its numbers. */
export interface VerifyEntry {
  readonly key: string;
  readonly result: FiguresResult;
}

function entryOf(value: unknown): VerifyEntry | null {
  const { key, result } = (value ?? {}) as Partial<VerifyEntry>;
  if (typeof key !== 'string' || typeof result !== 'object' || result === null) return null;
  const sound = typeof result.failure === 'string' || typeof result.figures?.signal?.mean === 'number';
  return sound ? { key, result } : null;
}

const same = (a: LedgerHeader, b: LedgerHeader): boolean =>
  a.format === b.format && a.study === b.study && a.version === b.version;

/**
 * Opens verify.jsonl of a run and gives what earlier sessions verified. One that another study or version began is
 * begun anew: everything in it can be computed again.
 */
export async function openVerifyLedger(
  run: FinishedRun,
): Promise<{ ledger: Ledger<VerifyEntry>; known: Map<string, FiguresResult> }> {
  const path = join(run.directory, FILE);
  const header = { format: VERIFY_LEDGER_FORMAT, study: run.hash, version: packageVersion(), seed: 0 };
  const bytes = await readFile(path).catch((error: NodeJS.ErrnoException) => {
    if (error.code === 'ENOENT') return Buffer.alloc(0);
    throw fileError(error, path);
  });
  const found = parseLines(bytes, entryOf);
  if (found.header === null || !same(found.header, header)) {
    return { ledger: await Ledger.begin<VerifyEntry>(path, header), known: new Map() };
  }
  const known = new Map(found.entries.map(({ key, result }) => [key, result]));
  return { ledger: await Ledger.continue<VerifyEntry>(path, found.sound), known };
}
