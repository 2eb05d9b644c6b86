import { parentPort, workerData } from 'node:worker_threads';
import type { ProblemSpec } from '../problem/contract.js';
import { createProblem } from '../problem/problem.js';
import type { Task } from '../tasks/contract.js';
import { runTask } from '../tasks/registry.js';
import { evaluateForSearch, gradientForSearch } from './evaluate.js';
import type { WorkerMessage } from './pool.js';

const spec = workerData as ProblemSpec;
const problem = createProblem(spec, evaluateForSearch, gradientForSearch);
const port = parentPort;
if (port === null) throw new Error('this module is the entry of a worker thread');

port.on('message', (task: Task) => {
  let answer: WorkerMessage;
  try {
    answer = { kind: 'done', result: runTask(spec, problem, task) };
  } catch (error) {
    const message = error instanceof Error ? error.message : String(error);
    answer = { kind: 'failed', id: task.id, message: `task ${task.id}: ${message}` };
  }
  port.postMessage(answer);
});
