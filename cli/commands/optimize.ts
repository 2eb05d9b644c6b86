import { join } from 'node:path';
import { checkSupport } from '../../core/index.js';
import { judge, taskPool } from '../../optimizers/index.js';
import { frontText, levelList } from '../report/front-text.js';
import { infeasibleText } from '../report/limits-text.js';
import type { RunResult } from '../run/contract.js';
import { openRun } from '../run/directory.js';
import { frontDocument } from '../run/front-json.js';
import { LEDGER_FORMAT } from '../run/ledger-format.js';
import { packageVersion } from '../run/package.js';
import { formatRemark } from '../study/index.js';
import type { Command, Context, ExitCode } from './contract.js';
import { JSON_OPTION, once, workerCount } from './options.js';
import { runSession } from './session.js';
import { loadStudy } from './study-file.js';

/** Designs whose brightness, evaluated anew, misses the level that the search had them at. */
function shortfalls(result: RunResult): string[] {
  const { goal } = result.study;
  const points = result.best === null ? result.front : [...result.front, result.best];
  return points.flatMap(({ file, level, figures }) => {
    const value = judge(figures, goal).brightness;
    if (result.study.parameters.length === 0 || value >= level * (1 - 1e-6)) return [];
    return [`${file}: signal.${goal.brightness} is ${value} at accuracy quoted; the level is ${level}`];
  });
}

function conclude(result: RunResult, directory: string, json: boolean, context: Context): ExitCode {
  const missed = shortfalls(result);
  for (const line of missed) context.note(line);
  if (json) context.print(JSON.stringify(frontDocument(result), null, 2));
  else context.print(frontText(result, directory, context));
  if (result.nearest !== null) {
    context.note(infeasibleText(result.nearest, result.study, result.outcome.evaluations));
    return 1;
  }
  if (result.outOfReach.length > 0) {
    if (json) context.note(`brightness levels out of reach: ${levelList(result.outOfReach)}`);
    return 1;
  }
  if (result.front.length === 0) {
    context.note(
      'no design of the study could be judged: see the notes of pulsewright evaluate on one of them',
    );
    return 1;
  }
  return missed.length > 0 ? 1 : 0;
}

export const optimize: Command = {
  configure: (yargs) =>
    yargs
      .positional('study', { type: 'string', describe: 'study file', demandOption: true })
      .option('out', {
        type: 'string',
        requiresArg: true,
        demandOption: true,
        describe: 'run directory, new or empty',
        coerce: once('out'),
      })
      .option('workers', {
        type: 'string',
        requiresArg: true,
        describe: 'worker threads (all cores when left out); the result does not depend on it',
        coerce: workerCount,
      })
      .option('resume', { type: 'boolean', default: false, describe: 'go on with a run that was stopped' })
      .option('json', JSON_OPTION)
      .example('pulsewright optimize study.yaml --out run', 'front, best design and a file for each design')
      .example(
        'pulsewright optimize study.yaml --out run --resume',
        'go on after Ctrl-C, a crash or a power cut',
      ),
  async run(args, context) {
    const file = await loadStudy(String(args['study']));
    const directory = String(args['out']);
    const { study, hash, bytes } = file;
    checkSupport(study.design);
    const header = { format: LEDGER_FORMAT, study: hash, version: packageVersion(), seed: study.search.seed };
    const workers = workerCount(args['workers'] === undefined ? undefined : String(args['workers']));
    // Threads take a while to load: they begin while the directory is opened.
    const pool = taskPool(study, workers);
    const result = await (async () => {
      const run = await openRun({ directory, resume: args['resume'] === true, header, study: bytes });
      for (const remark of [...file.remarks.map(formatRemark), ...run.remarks]) context.note(remark);
      return runSession(file, run, pool, context);
    })().finally(() => pool.close());
    if (result !== null) return conclude(result, directory, args['json'] === true, context);
    context.note(`stopped; what is finished is in ${join(directory, 'ledger.jsonl')}`);
    context.note(`go on with: pulsewright optimize ${file.path} --out ${directory} --resume`);
    return 130;
  },
};
