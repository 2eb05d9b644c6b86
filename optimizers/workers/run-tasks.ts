import type { Task, TaskResult } from '../tasks/contract.js';
import type { TaskPool } from './contract.js';

/** Tasks on their way per worker: the next one is there when a worker ends its own. */
const AHEAD = 2;

/**
 * Runs independent tasks, as many at once as keep every worker busy, each taken from the iterable when there is room.
 * Returns when all results were taken in, or soon after the signal is aborted: what runs then is given up once its
 * owner closes the pool. Rejects with the first failure.
 */
export async function runTasks(
  pool: TaskPool,
  tasks: Iterable<Task>,
  signal: AbortSignal,
  onResult: (result: TaskResult, task: Task) => void | Promise<void>,
): Promise<void> {
  const waiting = tasks[Symbol.iterator]();
  let failed = false;
  const lane = async (): Promise<void> => {
    while (!failed && !signal.aborted) {
      const next = waiting.next();
      if (next.done === true) return;
      const result = await pool.run(next.value);
      if (signal.aborted) return;
      await onResult(result, next.value);
    }
  };
  const guarded = async () => {
    try {
      await lane();
    } catch (error) {
      failed = true;
      if (!signal.aborted) throw error;
    }
  };
  const stopped = new Promise<void>((resolve) => {
    if (signal.aborted) resolve();
    signal.addEventListener('abort', () => resolve(), { once: true });
  });
  const lanes = pool.size > 1 ? AHEAD * pool.size : 1;
  await Promise.race([Promise.all(Array.from({ length: lanes }, guarded)), stopped]);
}
