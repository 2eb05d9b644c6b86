import type { ProblemSpec } from '../problem/contract.js';
import { createProblem } from '../problem/problem.js';
import type { TaskPool } from './contract.js';
import { evaluateExactly, evaluateForSearch, gradientForSearch } from './evaluate.js';
import { workerPool } from './pool.js';
import { serialPool } from './serial.js';

/** Threads for a problem: as many as asked for, or for 0 and 1 none but this one. The results are the same. */
export function taskPool(spec: ProblemSpec, workers: number): TaskPool {
  if (workers > 1) return workerPool(spec, workers);
  return serialPool(
    spec,
    createProblem(spec, evaluateForSearch, gradientForSearch, undefined, evaluateExactly),
  );
}
