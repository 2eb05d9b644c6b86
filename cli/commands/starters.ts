import { readdir, readFile } from 'node:fs/promises';
import { join } from 'node:path';
import { packageRoot } from '../run/package.js';

/** A bundled study to begin with. */
export interface Starter {
  readonly name: string;
  readonly text: string;
}

/** Every bundled study, by name. */
export async function starters(): Promise<Starter[]> {
  const folder = join(packageRoot(), 'cli', 'study', 'starters');
  const files = (await readdir(folder)).filter((name) => name.endsWith('.yaml')).sort();
  return Promise.all(
    files.map(async (name) => ({
      name: name.slice(0, -'.yaml'.length),
      text: await readFile(join(folder, name), 'utf8'),
    })),
  );
}
