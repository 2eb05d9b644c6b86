import { join } from 'node:path';
import { withExactPhonons } from '../../core/index.js';
import { applyParameters } from '../../optimizers/index.js';
import { writeStudyFile } from '../study/index.js';
import type { FrontDesign, RunResult } from './contract.js';
import { DESIGNS, keepDesigns } from './directory.js';
import { frontDocument } from './front-json.js';
import { makeDirectory } from './make-directory.js';
import { archiveCsv, frontCsv } from './tables.js';
import { removeTemporaries, writeWhole } from './whole-file.js';

export const BEST_FILE = `${DESIGNS}/best.yaml`;

/** File of the design number `index` (from 0) among `count`: `designs/01.yaml`. */
export function designFile(index: number, count: number): string {
  const digits = Math.max(2, String(count).length);
  return `${DESIGNS}/${String(index + 1).padStart(digits, '0')}.yaml`;
}

async function writeDesignFile(result: RunResult, point: FrontDesign, directory: string): Promise<void> {
  const name = point.file.slice(DESIGNS.length + 1).replace('.yaml', '');
  const title = result.study.title === '' ? `design ${name}` : `${result.study.title}: design ${name}`;
  const design = applyParameters(result.study, point.values);
  // A front that was corrected by the exact phonon method holds its figures: the file gives them again.
  const quoted = point.figures.phonons.method === 'exact' ? withExactPhonons(design) : design;
  await writeWhole(join(directory, point.file), writeStudyFile(result.study, quoted, title));
}

/**
 * Writes all files of a finished run, each whole or not at all; front.json comes last.
 * @param picture SVG of the front
 */
export async function writeResults(directory: string, result: RunResult, picture: string): Promise<void> {
  const designs = result.best === null ? result.front : [...result.front, result.best];
  await makeDirectory(join(directory, DESIGNS));
  for (const point of designs) await writeDesignFile(result, point, directory);
  await keepDesigns(
    directory,
    designs.map((point) => point.file.slice(DESIGNS.length + 1)),
  );
  await writeWhole(join(directory, 'front.csv'), frontCsv(result));
  await writeWhole(join(directory, 'archive.csv'), archiveCsv(result));
  await writeWhole(join(directory, 'front.svg'), picture);
  await writeWhole(join(directory, 'front.json'), `${JSON.stringify(frontDocument(result), null, 2)}\n`);
  await removeTemporaries(directory);
  await removeTemporaries(join(directory, DESIGNS));
}
