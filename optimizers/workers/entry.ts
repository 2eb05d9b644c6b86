import { parentPort, workerData } from 'node:worker_threads';
import type { Design } from '../../core/index.js';
import { createProblem, evaluateOneByOne, type Problem } from '../problem/problem.js';
import { runTask } from '../tasks/registry.js';
import { evaluateExactly, evaluateForSearch, gradientForSearch } from './evaluate.js';
import { failureOf } from './failure.js';
import type { WorkerMessage, WorkerOrder, WorkerSetup } from './messages.js';
import { helpWith, type SharedBatch } from './shared-batch.js';
import { sharingMap } from './sharing.js';

const { spec, idle } = workerData as WorkerSetup;
if (parentPort === null) throw new Error('this module is the entry of a worker thread');
const port = parentPort;
const say = (message: WorkerMessage) => port.postMessage(message);

const evaluateOne = (design: Design) => evaluateOneByOne(evaluateForSearch)([design])[0];

function problemHere(): Problem | null {
  try {
    const publish = (batch: SharedBatch<Design>) => say({ kind: 'share', batch });
    const evaluateMany = sharingMap(idle, publish, evaluateOne);
    return createProblem(spec, evaluateForSearch, gradientForSearch, evaluateMany, evaluateExactly);
  } catch (error) {
    say({ kind: 'broken', failure: failureOf(error) });
    return null;
  }
}

function obey(problem: Problem, order: WorkerOrder): WorkerMessage | null {
  if (order.kind === 'leave') {
    port.close();
    return null;
  }
  if (order.kind === 'help') {
    helpWith(order.batch as SharedBatch<Design>, evaluateOne);
    return { kind: 'helped' };
  }
  try {
    return { kind: 'done', result: runTask(spec, problem, order.task) };
  } catch (error) {
    return { kind: 'failed', failure: failureOf(error) };
  }
}

const problem = problemHere();
if (problem !== null) {
  port.on('message', (order: WorkerOrder) => {
    const answer = obey(problem, order);
    if (answer !== null) say(answer);
  });
}
