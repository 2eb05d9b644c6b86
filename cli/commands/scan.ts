import { stat } from 'node:fs/promises';
import { basename, dirname, extname } from 'node:path';
import { scanCsv, scanDocument, scanPicture, scanText } from '../report/scan-report.js';
import { fileError, UserError } from '../run/user-error.js';
import { writeWhole } from '../run/whole-file.js';
import type { Command } from './contract.js';
import { untilInterrupted } from './interrupt.js';
import { JSON_OPTION, once, SET_OPTION, workerCount } from './options.js';
import { planOf, scanOf } from './scan-points.js';

async function checkTarget(base: string): Promise<void> {
  const folder = dirname(base);
  try {
    if (!(await stat(folder)).isDirectory()) throw new UserError(`${folder}: is not a directory`);
  } catch (error) {
    throw fileError(error, folder);
  }
}

export const scan: Command = {
  configure: (yargs) =>
    yargs
      .positional('study', { type: 'string', describe: 'study file', demandOption: true })
      .option('over', {
        type: 'string',
        array: true,
        nargs: 1,
        demandOption: true,
        describe: 'path=from..to:count, once or twice; :log at the end for even ratios',
      })
      .option('together', {
        type: 'boolean',
        default: false,
        describe: 'step every --over at the same time: one line through all of them instead of a map',
      })
      .option('figure', {
        type: 'string',
        array: true,
        nargs: 1,
        default: [] as string[],
        describe: 'path of a figure to draw, such as collected.g2; the CSV holds them all',
      })
      .option('set', SET_OPTION)
      .option('accuracy', {
        choices: ['quoted', 'search'] as const,
        default: 'quoted' as const,
        describe: 'quoted: checked error; search: about four times faster',
      })
      .option('out', {
        type: 'string',
        requiresArg: true,
        describe: 'path of the files without .csv and .svg (<study>-scan when left out)',
        coerce: once('out'),
      })
      .option('workers', {
        type: 'string',
        requiresArg: true,
        describe: 'worker threads (all cores when left out); the result does not depend on it',
        coerce: workerCount,
      })
      .option('json', JSON_OPTION)
      .example('pulsewright scan design.yaml --over "pulse.tones.0.area=0 pi..4 pi:81"', 'Rabi oscillation')
      .example(
        'pulsewright scan design.yaml --over "tones.0.area=0 pi..6 pi:61" --over "tones.0.detuning=-1 meV..1 meV:41"',
        'a map',
      )
      .example(
        'pulsewright scan design.yaml --together --over "tones.0.fwhm=2 ps..8 ps:9:log" --over "tones.0.area=2 pi..4 pi:9:log"',
        'the area along with the square root of the width',
      ),
  async run(args, context) {
    const plan = await planOf(args);
    const json = args['json'] === true;
    const asked = args['out'] as string | undefined;
    const { path } = plan.file;
    const base = asked ?? `${basename(path, extname(path))}-scan`;
    const files = !json || asked !== undefined;
    if (files) await checkTarget(base);
    const workers = workerCount(args['workers'] === undefined ? undefined : String(args['workers']));
    const figures = (args['figure'] as unknown[]).map(String);
    const result = await untilInterrupted(context, (signal) =>
      scanOf(plan, figures, { workers, signal }, context),
    );
    if (result === null) {
      context.note('stopped; nothing was written');
      return 130;
    }
    if (files) {
      await writeWhole(`${base}.csv`, scanCsv(result));
      await writeWhole(`${base}.svg`, await scanPicture(result));
    }
    if (json) context.print(JSON.stringify(scanDocument(result), null, 2));
    else context.print(`${scanText(result, context.color)}\n\nfiles: ${base}.csv, ${base}.svg`);
    return 0;
  },
};
