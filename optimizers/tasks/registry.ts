import { stream } from '../../core/numerics/stream.js';
import type { ProblemSpec } from '../problem/contract.js';
import type { Problem } from '../problem/problem.js';
import { goalWithin } from '../problem/third.js';
import type { Task, TaskResult, TaskRunner } from './contract.js';
import { correctTask } from './correct.js';
import { figuresTask } from './figures.js';
import { islandTask } from './island.js';
import { methodTask } from './method.js';
import { Recorder } from './recorder.js';
import { sampleTask } from './sample.js';
import { solveTask } from './solve.js';

/** Every kind of task, by name. */
export const taskRunners: ReadonlyMap<string, TaskRunner> = new Map([
  ['sample', sampleTask],
  ['island', islandTask],
  ['solve', solveTask],
  ['method', methodTask],
  ['correct', correctTask],
  ['figures', figuresTask],
]);

/** Runs a task to its end on this thread. Throws for an unknown kind. */
export function runTask(spec: ProblemSpec, problem: Problem, task: Task): TaskResult {
  const runner = taskRunners.get(task.kind);
  if (runner === undefined) {
    throw new Error(
      `task ${task.id}: unknown kind ${task.kind}; known are ${[...taskRunners.keys()].join(', ')}`,
    );
  }
  const goal = task.within === undefined ? spec.goal : goalWithin(spec.goal, task.within.bound);
  const own = task.within === undefined ? problem : problem.withGoal(goal);
  const recorder = new Recorder(own, task.within === undefined ? null : spec.goal);
  const seed = stream(spec.search.seed, task.index).int(2 ** 32);
  const summary =
    task.budget > 0 ? runner(task, { spec: { ...spec, goal }, problem: own, recorder, seed }) : null;
  if (recorder.evaluations > task.budget) {
    throw new Error(`task ${task.id}: spent ${recorder.evaluations} evaluations of ${task.budget}`);
  }
  const { evaluations, points, nearest } = recorder;
  return { id: task.id, evaluations, points, ...(nearest === null ? {} : { nearest }), summary };
}
