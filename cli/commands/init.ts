import { lstat } from 'node:fs/promises';
import { join } from 'node:path';
import { makeDirectory } from '../run/make-directory.js';
import { fileError, UserError } from '../run/user-error.js';
import { writeWhole } from '../run/whole-file.js';
import { jsonSchema } from '../study/index.js';
import { nearestName } from '../study/nearest.js';
import type { Command } from './contract.js';
import { once } from './options.js';
import { type Starter, starters } from './starters.js';

const STUDY_FILE = 'study.yaml';
const SCHEMA_FILE = 'study.schema.json';
const DEFAULT_STARTER = 'resonant';

async function starterNamed(name: string): Promise<Starter> {
  const all = await starters();
  const found = all.find((starter) => starter.name === name);
  if (found) return found;
  const near = nearestName(
    name,
    all.map((s) => s.name),
  );
  const hint = near === null ? '' : `; nearest: ${near}`;
  throw new UserError(`--starter: got ${name}; needs one of ${all.map((s) => s.name).join(', ')}${hint}`);
}

async function refuseExisting(path: string): Promise<void> {
  const there = await lstat(path).catch((error: NodeJS.ErrnoException) => {
    if (error.code === 'ENOENT') return null;
    throw fileError(error, path);
  });
  if (there !== null)
    throw new UserError(`${path}: exists already and is not overwritten; nothing was written`);
}

export const init: Command = {
  configure: (yargs) =>
    yargs
      .positional('dir', { type: 'string', default: '.', describe: 'directory, made where it is missing' })
      .option('starter', {
        type: 'string',
        requiresArg: true,
        describe: `name of the starter study (${DEFAULT_STARTER} when left out)`,
        coerce: once('starter'),
      })
      .example('pulsewright init dot-h7', 'study.yaml and study.schema.json in a new directory')
      .example('pulsewright init dot-h7 --starter chirped', 'another starting point'),
  async run(args, context) {
    const directory = String(args['dir']);
    const starter = await starterNamed((args['starter'] as string | undefined) ?? DEFAULT_STARTER);
    const study = join(directory, STUDY_FILE);
    const schema = join(directory, SCHEMA_FILE);
    await makeDirectory(directory);
    await refuseExisting(study);
    await refuseExisting(schema);
    await writeWhole(study, starter.text);
    await writeWhole(schema, `${JSON.stringify(jsonSchema(), null, 2)}\n`);
    context.print(`${study}: starter study ${starter.name}`);
    context.print(`${schema}: for editors that complete and check YAML`);
    context.print(`next: pulsewright check ${study}, then pulsewright optimize ${study} --out run`);
    return 0;
  },
};
