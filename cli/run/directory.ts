import { open, readdir, readFile, rm, stat } from 'node:fs/promises';
import { join } from 'node:path';
import { Ledger } from './ledger.js';
import { checkHeader, type LedgerEntry, type LedgerHeader, readLedger } from './ledger-format.js';
import { LOCK, lockRun } from './lock.js';
import { makeDirectory } from './make-directory.js';
import { fileError, UserError } from './user-error.js';
import { temporaryOf, writeWhole } from './whole-file.js';

export const LEDGER = 'ledger.jsonl';
export const STUDY = 'study.yaml';
export const DESIGNS = 'designs';
/** Everything that can be rebuilt from study and ledger, besides the designs. */
const RESULTS: readonly string[] = [
  ...['front.csv', 'archive.csv', 'front.json', 'front.svg', 'report.html'],
  ...['verify.jsonl', 'verify.csv', 'verify.json'],
];
const DESIGN_FILE = /^(\d{2,}|best)\.yaml$/;

/** An open run directory. */
export interface Run {
  readonly directory: string;
  readonly ledger: Ledger;
  /** What earlier sessions finished. */
  readonly entries: readonly LedgerEntry[];
  /** Things the user should know about how the run was opened. */
  readonly remarks: readonly string[];
  /** Closes the ledger and lets others work on the directory. */
  close(): Promise<void>;
}

export interface RunRequest {
  readonly directory: string;
  readonly resume: boolean;
  readonly header: LedgerHeader;
  /** Bytes of the study file. */
  readonly study: Uint8Array;
}

async function names(directory: string): Promise<string[]> {
  try {
    return (await readdir(directory)).sort();
  } catch (error) {
    throw fileError(error, directory);
  }
}

/** Creates the directory where it is missing and tries whether it takes a file. */
async function prepare(directory: string): Promise<void> {
  const there = await stat(directory).catch(() => null);
  if (there !== null && !there.isDirectory()) {
    throw new UserError(`${directory}: is not a directory; --out needs a directory`);
  }
  const trial = join(directory, `.writable.${process.pid}.tmp`);
  try {
    await makeDirectory(directory);
    await (await open(trial, 'w')).close();
    await rm(trial);
  } catch (error) {
    throw fileError(error, directory);
  }
}

function isOurs(name: string): boolean {
  const known = [LEDGER, STUDY, DESIGNS, LOCK, ...RESULTS];
  const temporary = temporaryOf(name);
  return (
    known.includes(name) || (temporary !== null && (temporary === 'writable' || known.includes(temporary)))
  );
}

async function foreignFiles(directory: string): Promise<string[]> {
  const foreign: string[] = [];
  for (const name of await names(directory)) {
    if (!isOurs(name)) foreign.push(name);
    else if (name === DESIGNS) {
      const inside = await names(join(directory, DESIGNS));
      const ours = (file: string) => DESIGN_FILE.test(temporaryOf(file) ?? file);
      foreign.push(...inside.filter((file) => !ours(file)).map((file) => `${DESIGNS}/${file}`));
    }
  }
  return foreign;
}

/** Refuses a directory that holds anything but files that a run of ours would leave. */
async function checkEmpty(directory: string, study: Uint8Array): Promise<void> {
  const foreign = await foreignFiles(directory);
  if (foreign.length > 0) {
    const shown = foreign.slice(0, 3).join(', ') + (foreign.length > 3 ? ', …' : '');
    throw new UserError(`${directory}: is not empty (${shown}); needs a new or empty directory`);
  }
  // A lone study is no run of ours, which begins with the ledger: it may be the only copy of somebody's work.
  const lone = (await names(directory)).filter((name) => temporaryOf(name) === null && name !== LOCK);
  if (lone.length === 1 && lone[0] === STUDY) {
    const present = await readFile(join(directory, STUDY));
    if (!present.equals(study)) {
      throw new UserError(
        `${join(directory, STUDY)}: is another study and would be lost; needs a new directory`,
      );
    }
  }
}

/** Removes results of an earlier run, so that no two runs mix. */
export async function removeResults(directory: string): Promise<void> {
  for (const name of RESULTS) await rm(join(directory, name), { force: true });
  await keepDesigns(directory, []);
}

/** Removes every file of ours from the designs but the ones named. */
export async function keepDesigns(directory: string, keep: readonly string[]): Promise<void> {
  const folder = join(directory, DESIGNS);
  const present = await readdir(folder).catch(() => []);
  for (const name of present) {
    const ours = DESIGN_FILE.test(temporaryOf(name) ?? name);
    if (ours && !keep.includes(name)) await rm(join(folder, name), { force: true });
  }
}

/** What is found in the ledger, or a new one. */
type Opened = Pick<Run, 'ledger' | 'entries' | 'remarks'>;

async function begin(request: RunRequest, remarks: readonly string[]): Promise<Opened> {
  const { directory, header } = request;
  await removeResults(directory);
  return { ledger: await Ledger.begin(join(directory, LEDGER), header), entries: [], remarks };
}

async function openLedger(request: RunRequest): Promise<Opened> {
  const { directory, header, resume, study } = request;
  const path = join(directory, LEDGER);
  const found = await readLedger(path);
  if (found === null) {
    await checkEmpty(directory, study);
    return begin(request, resume ? [`${directory}: holds no run yet; started from the beginning`] : []);
  }
  if (!resume) {
    throw new UserError(
      `${directory}: holds a run already; go on with it by --resume, or choose another --out`,
    );
  }
  if (found.header === null) {
    return begin(request, [`${path}: the first line is torn or missing; started from the beginning`]);
  }
  checkHeader(found.header, header, path);
  const remarks =
    found.damaged === null
      ? []
      : [`${path}: line ${found.damaged} is damaged; what follows is computed again`];
  return { ledger: await Ledger.continue(path, found.sound), entries: found.entries, remarks };
}

/**
 * Opens a run directory, new or to be resumed, before any work starts, and keeps other processes from it.
 * @throws UserError when it cannot be written, holds something else, belongs to another study, version or format, or is
 * in use
 */
export async function openRun(request: RunRequest): Promise<Run> {
  const { directory, study } = request;
  await prepare(directory);
  const lock = await lockRun(directory);
  try {
    const { ledger, entries, remarks } = await openLedger(request);
    await writeWhole(join(directory, STUDY), study);
    const close = async () => {
      await ledger.close();
      lock.release();
    };
    return { directory, ledger, entries, remarks: [...lock.remarks, ...remarks], close };
  } catch (error) {
    lock.release();
    throw error;
  }
}
