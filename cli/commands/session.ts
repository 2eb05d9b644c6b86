import { type SearchOutcome, type SearchProgress, search, type TaskPool } from '../../optimizers/index.js';
import { frontPicture } from '../report/front-picture.js';
import { threeDigits } from '../report/numbers.js';
import { loadDrawing } from '../report/plots/render.js';
import { type Progress, progressBar } from '../report/progress.js';
import type { RunResult } from '../run/contract.js';
import type { Run } from '../run/directory.js';
import { explain } from '../run/explain/explanation.js';
import { packageVersion } from '../run/package.js';
import { writeResults } from '../run/results.js';
import type { Context } from './contract.js';
import { untilInterrupted } from './interrupt.js';
import { outOfReach, quoteFront } from './quote.js';
import type { StudyFile } from './study-file.js';

/** What one session of a run works with. */
interface Session {
  readonly file: StudyFile;
  readonly run: Run;
  readonly pool: TaskPool;
  readonly signal: AbortSignal;
  readonly progress: Progress;
}

function bestText({ best }: SearchProgress): string {
  if (best === null) return '';
  return `best ${threeDigits(best.impurity)} at ${threeDigits(best.brightness)}`;
}

/** Searches and keeps the ledger; `wall` is the time of all sessions up to the last finished task, s. */
async function searchWithLedger(session: Session): Promise<{ outcome: SearchOutcome; wall: number }> {
  const { file, run, pool, signal, progress } = session;
  const earlier = run.entries[run.entries.length - 1]?.wall ?? 0;
  const began = performance.now();
  let wall = earlier;
  const outcome = await search(file.study, {
    workers: pool.size,
    pool,
    signal,
    completed: new Map(run.entries.map(({ task }) => [task.id, task])),
    onTask: async (task) => {
      // This thread has nothing else to do while others search; a failure shows where the picture is drawn.
      if (pool.size > 1) loadDrawing().catch(() => undefined);
      wall = Math.round(earlier * 1000 + performance.now() - began) / 1000;
      await run.ledger.append({ task, wall });
    },
    ...(progress.shown
      ? {
          onProgress: (p: SearchProgress) =>
            progress.update({ stage: p.stage, done: p.evaluations, total: p.budget, best: bestText(p) }),
        }
      : {}),
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
  const quoted = await quoteFront(study, outcome, session.pool, signal, (done, points) =>
    progress.update({ stage: `quoting design ${done} of ${points}`, done: total, total, best: '' }),
  );
  if (quoted === null) return null;
  // Threads end while this one draws and writes; whoever opened the pool waits for it.
  void session.pool.close();
  const result: RunResult = {
    ...{ study, hash, version: packageVersion(), wall },
    ...quoted,
    outOfReach: outOfReach(study, outcome),
    ...{ archive: outcome.archive, outcome, explanation: explain(study, outcome, quoted.front) },
  };
  await writeResults(session.run.directory, result, await frontPicture(result));
  return result;
}

/**
 * Searches, writes all results and closes the ledger. SIGINT stops it between tasks.
 * @returns null when it was stopped
 */
export async function runSession(
  file: StudyFile,
  run: Run,
  pool: TaskPool,
  context: Context,
): Promise<RunResult | null> {
  const progress = progressBar(context.streams.stderr, 'evaluations');
  try {
    return await untilInterrupted(context, (signal) => work({ file, run, pool, signal, progress }));
  } finally {
    progress.stop();
    await run.close();
  }
}
