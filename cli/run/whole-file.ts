import { open, readdir, rename, rm } from 'node:fs/promises';
import { basename, dirname, join } from 'node:path';
import { fileError } from './user-error.js';

/** What an unfinished file of ours is called: a kill leaves nothing else behind. */
const TEMPORARY = /^\.(.+)\.[0-9]+\.tmp$/;

/** The name that a temporary file was to get, null for any other file. */
export function temporaryOf(name: string): string | null {
  return TEMPORARY.exec(name)?.[1] ?? null;
}

/**
 * Writes a file whole or not at all: into a temporary file beside it, synced, then renamed over it.
 * @throws UserError when the disk does not take it; the old file is then untouched
 */
export async function writeWhole(path: string, content: string | Uint8Array): Promise<void> {
  const temporary = join(dirname(path), `.${basename(path)}.${process.pid}.tmp`);
  try {
    const file = await open(temporary, 'w');
    try {
      await file.writeFile(content);
      await file.sync();
    } finally {
      await file.close();
    }
    await rename(temporary, path);
  } catch (error) {
    await rm(temporary, { force: true });
    throw fileError(error, path);
  }
}

/** Removes what killed writers left in a folder. */
export async function removeTemporaries(folder: string): Promise<void> {
  for (const name of await readdir(folder)) {
    if (temporaryOf(name) !== null) await rm(join(folder, name), { force: true });
  }
}
