import { join } from 'node:path';
import { verifyCsv, verifyDocument, verifyText } from '../report/verify-report.js';
import { readFinishedRun } from '../run/finished-run.js';
import { lockRun } from '../run/lock.js';
import { UserError } from '../run/user-error.js';
import { writeWhole } from '../run/whole-file.js';
import type { Command, Context, ExitCode } from './contract.js';
import { untilInterrupted } from './interrupt.js';
import { JSON_OPTION, workerCount } from './options.js';
import { studyOf, verifyDesigns } from './verify-designs.js';

/** What the command line asks for. */
interface Request {
  readonly directory: string;
  readonly workers: number;
  readonly json: boolean;
}

async function work(request: Request, signal: AbortSignal, context: Context): Promise<ExitCode> {
  const { directory, workers, json } = request;
  const run = await readFinishedRun(directory);
  if (run.designs.length === 0) {
    throw new UserError(`${directory}: the front has no point: there is nothing to verify`);
  }
  const { goal } = await studyOf(run);
  const points = await verifyDesigns(run, workers, signal, context);
  if (points === null) {
    context.note(`stopped; what is finished is in ${join(directory, 'verify.jsonl')}`);
    context.note(`go on with: pulsewright verify ${directory}`);
    return 130;
  }
  const document = verifyDocument(run, goal, points);
  await writeWhole(join(directory, 'verify.csv'), verifyCsv(run, goal, points));
  await writeWhole(join(directory, 'verify.json'), `${JSON.stringify(document, null, 2)}\n`);
  if (json) context.print(JSON.stringify(document, null, 2));
  else {
    context.print(verifyText(goal, points, context.color));
    context.print(`files: ${directory}/verify.csv, verify.json, verify.jsonl`);
  }
  return points.every(({ reasons }) => reasons.length === 0) ? 0 : 1;
}

/** The same while no other process works on the directory. */
async function alone(request: Request, signal: AbortSignal, context: Context): Promise<ExitCode> {
  await readFinishedRun(request.directory);
  const lock = await lockRun(request.directory);
  for (const remark of lock.remarks) context.note(remark);
  try {
    return await work(request, signal, context);
  } finally {
    lock.release();
  }
}

export const verify: Command = {
  configure: (yargs) =>
    yargs
      .positional('dir', { type: 'string', describe: 'directory of a finished run', demandOption: true })
      .option('workers', {
        type: 'string',
        requiresArg: true,
        describe: 'worker threads (all cores when left out); the result does not depend on it',
        coerce: workerCount,
      })
      .option('json', JSON_OPTION)
      .example('pulsewright verify run', 'quoted against independently computed figures, point by point')
      .example('pulsewright verify run --workers 1', 'after Ctrl-C or a crash: goes on where it was'),
  async run(args, context) {
    const directory = String(args['dir']);
    const workers = workerCount(args['workers'] === undefined ? undefined : String(args['workers']));
    const request = { directory, workers, json: args['json'] === true };
    return untilInterrupted(context, (signal) => alone(request, signal, context));
  },
};
