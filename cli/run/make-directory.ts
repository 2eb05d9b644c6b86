import { mkdir, stat } from 'node:fs/promises';
import { dirname } from 'node:path';
import { fileError, UserError } from './user-error.js';

async function isDirectory(path: string): Promise<boolean> {
  return stat(path).then(
    (found) => found.isDirectory(),
    () => false,
  );
}

/**
 * Makes a directory and its parents. Node's own recursive form never returns where a parent exists but takes no entries
 * (`/proc/1/run` on Node 20).
 * @throws UserError when it cannot be made
 */
export async function makeDirectory(path: string): Promise<void> {
  if (await isDirectory(path)) return;
  const parent = dirname(path);
  if (parent !== path && !(await isDirectory(parent))) await makeDirectory(parent);
  try {
    await mkdir(path);
  } catch (error) {
    if (await isDirectory(path)) return;
    if ((error as NodeJS.ErrnoException).code === 'EEXIST') {
      throw new UserError(`${path}: is not a directory`);
    }
    throw fileError(error, path);
  }
}
