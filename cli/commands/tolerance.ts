import { stat } from 'node:fs/promises';
import { basename, extname, join } from 'node:path';
import { toleranceDocument, tolerancePicture, toleranceText } from '../report/tolerance-report.js';
import { BEST_FILE } from '../run/results.js';
import { UserError } from '../run/user-error.js';
import { writeWhole } from '../run/whole-file.js';
import type { Command } from './contract.js';
import { fixedDesign } from './fixed-design.js';
import { assignments, JSON_OPTION, once, SET_OPTION } from './options.js';
import { loadStudy } from './study-file.js';
import { toleranceOf } from './tolerance-study.js';

/** A number between 0 and `most` given as text; null when left out. */
function numberOption(value: unknown, name: string, most: number): number | null {
  const text = once(name)(value);
  if (text === undefined) return null;
  const number = /^\s*$/.test(text) ? Number.NaN : Number(text);
  if (!(number > 0 && number <= most)) {
    throw new UserError(`--${name}: got ${text}; needs a number above 0 and at most ${most}`);
  }
  return number;
}

function wholeOption(value: unknown, name: string, fallback: number): number {
  const number = numberOption(value, name, 1e7) ?? fallback;
  if (!Number.isInteger(number)) throw new UserError(`--${name}: got ${number}; needs a whole number`);
  return number;
}

/** The design file that a path means: a study, or the best design of a run. */
async function designFileOf(path: string): Promise<string> {
  const found = await stat(path).catch(() => null);
  if (!found?.isDirectory()) return path;
  const best = join(path, BEST_FILE);
  if ((await stat(best).catch(() => null)) !== null) return best;
  throw new UserError(
    `${path}: has no ${BEST_FILE}; needs a finished run whose goal.at_least was reached, or the path of one design file`,
  );
}

const text = (describe: string) => ({ type: 'string', requiresArg: true, describe }) as const;

export const tolerance: Command = {
  configure: (yargs) =>
    yargs
      .positional('study', {
        type: 'string',
        describe: 'study file with fixed values, or the directory of a run',
        demandOption: true,
      })
      .option('impurity', text('largest impurity that is still accepted (any when left out)'))
      .option('brightness', text('least brightness that is still accepted (goal.at_least when left out)'))
      .option('samples', text('drift samples for the yield (400 when left out)'))
      .option('seed', text('seed of the samples (search.seed when left out)'))
      .option('set', SET_OPTION)
      .option('out', text('path of the picture without .svg (<study>-tolerance when left out)'))
      .option('json', JSON_OPTION)
      .example('pulsewright tolerance run --impurity 2e-3', 'the best design of a run against its drift')
      .example(
        'pulsewright tolerance design.yaml --set "drift.area=3 %" --brightness 0.6',
        'another drift, and a lower demand',
      ),
  async run(args, context) {
    const path = await designFileOf(String(args['study']));
    const file = await loadStudy(path, assignments(args['set'] as unknown[]));
    const design = fixedDesign(file, 'tolerance');
    const { goal, search } = file.study;
    const demand = {
      goal,
      brightness: numberOption(args['brightness'], 'brightness', 1e6) ?? goal.atLeast,
      impurity: numberOption(args['impurity'], 'impurity', 1e6),
    };
    if (demand.brightness === null && demand.impurity === null && goal.limits.length === 0) {
      throw new UserError(
        `${path}: nothing is demanded; needs goal.at_least, goal.limits, --brightness or --impurity`,
      );
    }
    const samples = wholeOption(args['samples'], 'samples', 400);
    const seed = wholeOption(args['seed'], 'seed', search.seed);
    const result = toleranceOf({ path, study: file.study, hash: file.hash, design, demand, samples, seed });
    const base = once('out')(args['out']) ?? `${basename(path, extname(path))}-tolerance`;
    const json = args['json'] === true;
    const files = !json || args['out'] !== undefined;
    if (files) await writeWhole(`${base}.svg`, await tolerancePicture(result));
    if (json) context.print(JSON.stringify(toleranceDocument(result), null, 2));
    else context.print(`${toleranceText(result, context.color)}\n\npicture: ${base}.svg`);
    return result.met ? 0 : 1;
  },
};
