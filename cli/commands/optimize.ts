import { join } from 'node:path';
import { type SearchOutcome, type SearchProgress, search } from '../../optimizers/index.js';
import { frontPicture } from '../report/front-picture.js';
import { frontText, levelList } from '../report/front-text.js';
import { threeDigits } from '../report/numbers.js';
import { type Progress, progressBar } from '../report/progress.js';
import type { RunResult } from '../run/contract.js';
import { openRun, type Run } from '../run/directory.js';
import { frontDocument } from '../run/front-json.js';
import { LEDGER_FORMAT } from '../run/ledger.js';
import { packageVersion } from '../run/package.js';
import { writeResults } from '../run/results.js';
import { formatRemark } from '../study/index.js';
import type { Command, Context, ExitCode } from './contract.js';
import { JSON_OPTION, once, workerCount } from './options.js';
import { outOfReach, quoteFront } from './quote.js';
import { loadStudy, type StudyFile } from './study-file.js';

/** What one session of a run works with. */
interface Session {
  readonly file: StudyFile;
  readonly run: Run;
  readonly workers: number;
  readonly signal: AbortSignal;
  readonly progress: Progress;
}

function bestText({ best }: SearchProgress): string {
  if (best === null) return '';
  return `best ${threeDigits(best.impurity)} at ${threeDigits(best.brightness)}`;
}

/** Searches and keeps the ledger; `wall` is the time of all sessions up to the last finished task, s. */
async function searchWithLedger(session: Session): Promise<{ outcome: SearchOutcome; wall: number }> {
  const { file, run, workers, signal, progress } = session;
  const earlier = run.entries[run.entries.length - 1]?.wall ?? 0;
  const began = performance.now();
  let wall = earlier;
  const outcome = await search(file.study, {
    workers,
    signal,
    completed: new Map(run.entries.map(({ task }) => [task.id, task])),
    onTask: async (task) => {
      wall = Math.round(earlier * 1000 + performance.now() - began) / 1000;
      await run.ledger.append({ task, wall });
    },
    onProgress: (p) =>
      progress.update({ stage: p.stage, done: p.evaluations, total: p.budget, best: bestText(p) }),
  });
  return { outcome, wall };
}

/** The whole run, or null when it was stopped. */
async function work(session: Session): Promise<RunResult | null> {
  const { file, signal, progress } = session;
  const { study, hash } = file;
  const { outcome, wall } = await searchWithLedger(session);
  if (outcome.kind === 'interrupted') return null;
  const total = study.search.evaluations;
  const quoted = await quoteFront(study, outcome, signal, (done, points) =>
    progress.update({ stage: `quoting design ${done} of ${points}`, done: total, total, best: '' }),
  );
  if (quoted === null) return null;
  const result: RunResult = {
    ...{ study, hash, version: packageVersion(), wall },
    ...{ front: quoted.front, best: quoted.best, outOfReach: outOfReach(study, outcome) },
    ...{ archive: outcome.archive, outcome },
  };
  await writeResults(session.run.directory, result, await frontPicture(result));
  return result;
}

/** Designs whose brightness, evaluated anew, misses the level that the search had them at. */
function shortfalls(result: RunResult): string[] {
  const { brightness } = result.study.goal;
  const points = result.best === null ? result.front : [...result.front, result.best];
  return points.flatMap(({ file, level, figures }) => {
    const value = figures.signal[brightness] ?? 0;
    if (result.study.parameters.length === 0 || value >= level * (1 - 1e-6)) return [];
    return [`${file}: signal.${brightness} is ${value} at accuracy quoted; the level is ${level}`];
  });
}

function conclude(result: RunResult, directory: string, json: boolean, context: Context): ExitCode {
  const missed = shortfalls(result);
  for (const line of missed) context.note(line);
  if (json) context.print(JSON.stringify(frontDocument(result), null, 2));
  else context.print(frontText(result, directory, context.color));
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

async function runOptimize(
  file: StudyFile,
  run: Run,
  workers: number,
  context: Context,
): Promise<RunResult | null> {
  const abort = new AbortController();
  const signals = context.streams.signals ?? process;
  // Only the first one is caught: a second Ctrl-C ends the process at once, and the ledger is sound all the same.
  const onInterrupt = () => abort.abort();
  signals.once('SIGINT', onInterrupt);
  const progress = progressBar(context.streams.stderr, 'evaluations');
  try {
    return await work({ file, run, workers, signal: abort.signal, progress });
  } finally {
    progress.stop();
    signals.off('SIGINT', onInterrupt);
    await run.ledger.close();
  }
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
    const header = { format: LEDGER_FORMAT, study: hash, version: packageVersion(), seed: study.search.seed };
    const run = await openRun({ directory, resume: args['resume'] === true, header, study: bytes });
    for (const remark of [...file.remarks.map(formatRemark), ...run.remarks]) context.note(remark);
    const workers = workerCount(args['workers'] === undefined ? undefined : String(args['workers']));
    const result = await runOptimize(file, run, workers, context);
    if (result !== null) return conclude(result, directory, args['json'] === true, context);
    context.note(`stopped; what is finished is in ${join(directory, 'ledger.jsonl')}`);
    context.note(`go on with: pulsewright optimize ${file.path} --out ${directory} --resume`);
    return 130;
  },
};
