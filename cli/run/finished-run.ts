import { createHash } from 'node:crypto';
import { readFile } from 'node:fs/promises';
import { join } from 'node:path';
import type { Design, Figures } from '../../core/index.js';
import { frontContent } from './read-front.js';
import { fileError } from './user-error.js';

/** A design of a finished run as it was quoted. */
export interface QuotedDesign {
  /** Its file, relative to the run directory. */
  readonly file: string;
  /** Brightness level asked for that it serves. */
  readonly level: number;
  readonly figures: Figures;
}

export interface FinishedRun {
  readonly directory: string;
  /** Hash of the study it was made from. */
  readonly hash: string;
  readonly version: string;
  /** The front in its order, then the best design where there is one. */
  readonly designs: readonly QuotedDesign[];
}

/**
 * What a finished run quotes.
 * @throws UserError when the directory holds no finished run
 */
export async function readFinishedRun(directory: string): Promise<FinishedRun> {
  const { study, version, points, best } = await frontContent(directory);
  // A design may stand in several slices; it serves the highest of its levels in each.
  const highest = new Map<string, (typeof points)[number]>();
  for (const point of points) {
    const known = highest.get(point.design);
    if (known === undefined || known.level < point.level) highest.set(point.design, point);
  }
  const listed = [...highest.values(), ...(best === null ? [] : [best])];
  return {
    ...{ directory, version, hash: study.hash },
    designs: listed.map(({ design, level, figures }) => ({ file: design, level, figures })),
  };
}

/** Bytes of a file of the run. */
export async function runFile(directory: string, name: string): Promise<Uint8Array> {
  const path = join(directory, name);
  try {
    return await readFile(path);
  } catch (error) {
    throw fileError(error, path);
  }
}

/** The same for the same numbers of a design, whatever file they stand in. */
export function designKey(design: Design): string {
  return createHash('sha256').update(JSON.stringify(design)).digest('hex');
}
