import { comparisonDocument, comparisonOf, comparisonPicture, comparisonText } from '../report/comparison.js';
import { MOST_SERIES } from '../report/plots/series.js';
import { type FrontFile, readFront } from '../run/read-front.js';
import { UserError } from '../run/user-error.js';
import { writeWhole } from '../run/whole-file.js';
import type { Command } from './contract.js';
import { JSON_OPTION, once } from './options.js';

/** Numbers of different figures do not belong on one axis. */
function checkSameFigures(fronts: readonly FrontFile[]): void {
  const [first] = fronts;
  const other = fronts.find((f) => f.impurity !== first.impurity || f.brightness !== first.brightness);
  if (!other) return;
  const goal = ({ directory, impurity, brightness }: FrontFile) =>
    `${directory} has ${impurity} against ${brightness}`;
  throw new UserError(`different figures cannot be compared: ${goal(first)}; ${goal(other)}`);
}

export const compare: Command = {
  configure: (yargs) =>
    yargs
      .positional('dir', {
        type: 'string',
        array: true,
        describe: 'run directories, finished; only their front.json is read',
        demandOption: true,
      })
      .option('out', {
        type: 'string',
        requiresArg: true,
        describe: 'SVG file of the picture; may be left out with --json',
        coerce: once('out'),
      })
      .option('json', JSON_OPTION)
      .example('pulsewright compare resonant two-photon --out fronts.svg', 'two ways to excite the same dot'),
  async run(args, context) {
    const directories = (args['dir'] as unknown[]).map(String);
    const out = args['out'] as string | undefined;
    const json = args['json'] === true;
    if (directories.length < 2 || directories.length > MOST_SERIES) {
      const got = `got ${directories.length} run director${directories.length === 1 ? 'y' : 'ies'}`;
      throw new UserError(`compare: ${got}; needs 2 to ${MOST_SERIES}`);
    }
    const twice = directories.find((directory, i) => directories.indexOf(directory) < i);
    if (twice !== undefined) throw new UserError(`compare: ${twice} is given twice`);
    if (out === undefined && !json) throw new UserError('--out: got nothing; needs the SVG file to write');
    if (out !== undefined && !/\.svg$/i.test(out)) {
      throw new UserError(`--out: got ${out}; needs a file name that ends in .svg`);
    }
    const fronts = await Promise.all(directories.map(readFront));
    checkSameFigures(fronts);
    const comparison = comparisonOf(fronts);
    if (out !== undefined) await writeWhole(out, await comparisonPicture(comparison));
    if (json) context.print(JSON.stringify(comparisonDocument(comparison), null, 2));
    else context.print(`${comparisonText(comparison, context.color)}\n\nfile: ${out}`);
    return 0;
  },
};
