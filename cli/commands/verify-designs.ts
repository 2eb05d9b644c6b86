import { join } from 'node:path';
import type { Design } from '../../core/index.js';
import { type FiguresInput, type FiguresResult, runTasks, taskPool } from '../../optimizers/index.js';
import { progressBar } from '../report/progress.js';
import { STUDY } from '../run/directory.js';
import { designKey, type FinishedRun, type QuotedDesign, runFile } from '../run/finished-run.js';
import { UserError } from '../run/user-error.js';
import { type VerifiedDesign, verdictOf } from '../run/verification.js';
import { openVerifyLedger } from '../run/verify-ledger.js';
import type { Study } from '../study/index.js';
import type { Context } from './contract.js';
import { fixedDesign } from './fixed-design.js';
import { soundStudy } from './study-file.js';

/** A quoted design with what its own file says. */
interface Listed {
  readonly quoted: QuotedDesign;
  readonly design: Design;
  readonly key: string;
}

/** The study of a run; it must be the one that its results were made from. */
export async function studyOf(run: FinishedRun): Promise<Study> {
  const path = join(run.directory, STUDY);
  const { study, hash } = soundStudy(await runFile(run.directory, STUDY), path, []);
  if (hash === run.hash) return study;
  throw new UserError(
    `${path}: is not the study that front.json was made from (${hash.slice(0, 12)}, ${run.hash.slice(0, 12)}); run optimize anew`,
  );
}

async function listedDesigns(run: FinishedRun): Promise<Listed[]> {
  return Promise.all(
    run.designs.map(async (quoted) => {
      const path = join(run.directory, quoted.file);
      const bytes = await runFile(run.directory, quoted.file);
      const design = fixedDesign({ path, bytes, ...soundStudy(bytes, path, []) }, 'verify');
      return { quoted, design, key: designKey(design) };
    }),
  );
}

/**
 * Evaluates every design of a run anew at accuracy `verified`, on worker threads, each result on disk before the next.
 * @returns null when the signal was aborted before all were done
 */
export async function verifyDesigns(
  run: FinishedRun,
  workers: number,
  signal: AbortSignal,
  context: Context,
): Promise<VerifiedDesign[] | null> {
  const study = await studyOf(run);
  const listed = await listedDesigns(run);
  const { ledger, known } = await openVerifyLedger(run);
  const missing = listed.filter(
    ({ key }, i) => !known.has(key) && listed.findIndex((other) => other.key === key) === i,
  );
  const total = listed.length;
  const done = () => listed.filter(({ key }) => known.has(key)).length;
  const progress = progressBar(context.streams.stderr, 'designs');
  const size = Math.min(workers, missing.length);
  const pool = taskPool(study, size);
  const tasks = missing.map(({ key, design }, index) => {
    const input: FiguresInput = { designs: [design], accuracy: 'verified' };
    return { id: key, kind: 'figures', index, budget: 1, input };
  });
  const show = () => progress.update({ stage: 'verify', done: done(), total, best: '' });
  try {
    show();
    await runTasks(pool, tasks, signal, async ({ id: key, summary }) => {
      const [result] = summary as readonly FiguresResult[];
      await ledger.append({ key, result });
      known.set(key, result);
      show();
    });
  } finally {
    progress.stop();
    await pool.close();
    await ledger.close();
  }
  if (done() < total) return null;
  const levelled = study.parameters.length > 0;
  return listed.map(({ quoted, design, key }) =>
    verdictOf(quoted, design, known.get(key) as FiguresResult, study.goal, levelled),
  );
}
