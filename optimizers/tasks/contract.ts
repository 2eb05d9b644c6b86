import type { EvaluatedPoint, ProblemSpec } from '../problem/contract.js';
import type { Problem } from '../problem/problem.js';
import type { Recorder } from './recorder.js';

/** A piece of a search that runs on one thread: plain data, a few seconds at most. */
export interface Task {
  /** Unique within a search, the same in every run of it; the ledger's key. */
  readonly id: string;
  /** Name of a runner in the registry of tasks. */
  readonly kind: string;
  /** Stable index of the task within the search: chooses its random stream. */
  readonly index: number;
  /** Hard cap of its evaluations. */
  readonly budget: number;
  /** What the runner needs besides; plain JSON. */
  readonly input: unknown;
  /** Works within a slice of a front with three objectives: on two of them, with the bound (null: none) as a limit. */
  readonly within?: { readonly bound: number | null };
}

/** What a finished task leaves behind: plain JSON, the unit of the run ledger. */
export interface TaskResult {
  readonly id: string;
  readonly evaluations: number;
  /** The non-dominated ones of the task's own evaluations, by brightness; limits are met. */
  readonly points: readonly EvaluatedPoint[];
  /** The evaluation nearest to the limits of the goal; only where there was one and none met them all. */
  readonly nearest?: EvaluatedPoint;
  /** Plain JSON that later stages need. */
  readonly summary: unknown;
}

/** What a runner works with. */
export interface TaskContext {
  readonly spec: ProblemSpec;
  readonly problem: Problem;
  /** Evaluates and keeps the task's archive. */
  readonly recorder: Recorder;
  /** Seed of the task's random numbers, from root seed and task index. */
  readonly seed: number;
}

/** Does a task of one kind and returns its summary; must keep to the budget of the task. */
export type TaskRunner = (task: Task, context: TaskContext) => unknown;
