import { createReadStream } from 'node:fs';
import { stat } from 'node:fs/promises';
import { fileError, UserError } from '../run/user-error.js';
import {
  formatFault,
  MAX_STUDY_BYTES,
  type Override,
  type Remark,
  readStudy,
  type Study,
} from '../study/index.js';

/** A study file that was read and found sound. */
export interface StudyFile {
  readonly path: string;
  readonly bytes: Uint8Array;
  readonly study: Study;
  readonly remarks: readonly Remark[];
  readonly hash: string;
}

/** Bytes of a file, of a pipe too; stops where no study can be that long, so that an endless one is refused by size. */
export async function readBytes(path: string): Promise<Uint8Array> {
  const chunks: Buffer[] = [];
  let length = 0;
  try {
    const { size } = await stat(path);
    if (size > MAX_STUDY_BYTES) {
      throw new UserError(
        `${path}: got a file of ${size} bytes; needs at most ${MAX_STUDY_BYTES}: a study file is a short text`,
      );
    }
    for await (const chunk of createReadStream(path)) {
      chunks.push(chunk as Buffer);
      length += (chunk as Buffer).length;
      if (length > MAX_STUDY_BYTES) break;
    }
  } catch (error) {
    throw fileError(error, path);
  }
  return Buffer.concat(chunks);
}

/**
 * Reads a study.
 * @throws UserError with every fault, one a line
 */
export async function loadStudy(path: string, overrides: readonly Override[] = []): Promise<StudyFile> {
  const bytes = await readBytes(path);
  return { path, bytes, ...soundStudy(bytes, path, overrides) };
}

/** Reads a study from its bytes; throws UserError with every fault. */
export function soundStudy(
  bytes: Uint8Array,
  path: string,
  overrides: readonly Override[],
): { study: Study; remarks: readonly Remark[]; hash: string } {
  const result = readStudy(bytes, path, overrides);
  if (result.kind === 'faults') throw new UserError(result.faults.map(formatFault).join('\n'));
  return result;
}
