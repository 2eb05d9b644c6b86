import { readFile } from 'node:fs/promises';
import type { TaskResult } from '../../optimizers/index.js';
import { fileError, UserError } from './user-error.js';

export const LEDGER_FORMAT = 'pulsewright.ledger/1';

/** First line of a ledger: what the lines after it belong to. */
export interface LedgerHeader {
  readonly format: string;
  /** Hash of the study. */
  readonly study: string;
  /** Version of the package that computes. */
  readonly version: string;
  readonly seed: number;
}

/** A finished task with the wall time of the run up to its end, all sessions together, s. */
export interface LedgerEntry {
  readonly task: TaskResult;
  readonly wall: number;
}

export interface LedgerContent<Entry = LedgerEntry> {
  /** Null: torn or missing. */
  readonly header: LedgerHeader | null;
  readonly entries: readonly Entry[];
  /** Length in bytes up to the end of the last line that is sound. */
  readonly sound: number;
  /** Number of the first line that is damaged although it is not the last one; null when there is none. */
  readonly damaged: number | null;
}

function parseLine(line: string): unknown {
  try {
    return JSON.parse(line);
  } catch {
    return null;
  }
}

const isRecord = (value: unknown): value is Record<string, unknown> =>
  typeof value === 'object' && value !== null && !Array.isArray(value);

function headerOf(value: unknown): LedgerHeader | null {
  if (!isRecord(value) || typeof value['format'] !== 'string') return null;
  const { format, study, version, seed } = value;
  return {
    format,
    study: String(study ?? 'unknown'),
    version: String(version ?? 'unknown'),
    seed: Number(seed),
  };
}

function entryOf(value: unknown): LedgerEntry | null {
  if (!isRecord(value) || typeof value['wall'] !== 'number' || !isRecord(value['task'])) return null;
  const task = value['task'];
  const sound =
    typeof task['id'] === 'string' && Number.isInteger(task['evaluations']) && Array.isArray(task['points']);
  return sound ? { task: task as unknown as TaskResult, wall: value['wall'] } : null;
}

/** Reads the bytes of a ledger. A line counts only with its line feed: a kill can tear the last one. */
export function parseLedger(bytes: Buffer): LedgerContent {
  return parseLines(bytes, entryOf);
}

/** The same for lines of another kind: `read` gives the entry of a parsed line, null for a damaged one. */
export function parseLines<Entry>(
  bytes: Buffer,
  read: (value: unknown) => Entry | null,
): LedgerContent<Entry> {
  const entries: Entry[] = [];
  let header: LedgerHeader | null = null;
  let sound = 0;
  for (let number = 1, end = bytes.indexOf(10); end >= 0; number++, end = bytes.indexOf(10, sound)) {
    const value = parseLine(bytes.toString('utf8', sound, end));
    if (number === 1) {
      header = headerOf(value);
      if (header === null) return { header, entries, sound: 0, damaged: null };
    } else {
      const entry = read(value);
      if (entry === null) {
        const last = bytes.indexOf(10, end + 1) < 0;
        return { header, entries, sound, damaged: last ? null : number };
      }
      entries.push(entry);
    }
    sound = end + 1;
  }
  return { header, entries, sound, damaged: null };
}

/** Refuses a ledger that belongs to something else; both sides are named. */
export function checkHeader(found: LedgerHeader, wanted: LedgerHeader, path: string): void {
  const advice = 'choose another --out, or go on with what began it';
  const refuse = (what: string, a: string, b: string) =>
    new UserError(`${path}: was begun with ${what} ${a}; this is ${what} ${b}; ${advice}`);
  if (found.format !== wanted.format) throw refuse('format', found.format, wanted.format);
  if (found.version !== wanted.version) throw refuse('version', found.version, wanted.version);
  if (found.study !== wanted.study) throw refuse('study', found.study, wanted.study);
  if (found.seed !== wanted.seed) throw refuse('seed', String(found.seed), String(wanted.seed));
}

/** Content of a ledger file; null when there is none. */
export async function readLedger(path: string): Promise<LedgerContent | null> {
  try {
    return parseLedger(await readFile(path));
  } catch (error) {
    if ((error as NodeJS.ErrnoException).code === 'ENOENT') return null;
    throw fileError(error, path);
  }
}
