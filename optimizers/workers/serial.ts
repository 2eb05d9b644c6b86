import type { ProblemSpec } from '../problem/contract.js';
import type { Problem } from '../problem/problem.js';
import type { TaskResult } from '../tasks/contract.js';
import { runTask } from '../tasks/registry.js';
import type { TaskPool } from './contract.js';

/** Runs tasks one after another in this thread; signals are heard between tasks. */
export function serialPool(spec: ProblemSpec, problem: Problem): TaskPool {
  let closed = false;
  return {
    size: 1,
    async run(task): Promise<TaskResult> {
      await new Promise((resume) => setImmediate(resume));
      if (closed) throw new Error('the pool is closed');
      return runTask(spec, problem, task);
    },
    async close() {
      closed = true;
    },
  };
}
