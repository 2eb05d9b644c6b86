import type { EvaluatedPoint, ProblemSpec } from './problem/contract.js';
import type { Evaluate } from './problem/problem.js';
import type { TaskResult } from './tasks/contract.js';

export interface SearchProgress {
  readonly stage: string;
  readonly tasksDone: number;
  readonly tasksTotal: number;
  readonly evaluations: number;
  readonly budget: number;
  /** Least impurity at the brightness asked for, or at the brightest point so far when no level is set. */
  readonly best: { readonly brightness: number; readonly impurity: number } | null;
}

export interface FrontLevel {
  /** Brightness asked for. */
  readonly level: number;
  /** Least impurity with at least that brightness; null when the level is out of reach. */
  readonly point: EvaluatedPoint | null;
}

export interface StageReport {
  readonly name: string;
  readonly tasks: number;
  readonly evaluations: number;
  /** Hypervolume of the archive after the stage, against the reference of `SearchOutcome.hypervolume`. */
  readonly hypervolume: number;
}

export interface SearchOutcome {
  readonly kind: 'finished' | 'interrupted';
  readonly evaluations: number;
  /** Every non-dominated evaluation, sorted by brightness. */
  readonly archive: readonly EvaluatedPoint[];
  readonly front: readonly FrontLevel[];
  /** At `goal.atLeast`; null when no level is set or it is out of reach. */
  readonly best: EvaluatedPoint | null;
  readonly hypervolume: {
    readonly value: number;
    readonly reference: { readonly impurity: number; readonly brightness: number };
    readonly meaning: string;
  };
  readonly stages: readonly StageReport[];
}

export interface SearchOptions {
  /** Worker threads; 0 or 1 = in this thread. */
  readonly workers: number;
  /** Finished tasks of an earlier run, from the ledger, by id. */
  readonly completed: ReadonlyMap<string, TaskResult>;
  /** Called once per newly finished task, before anything depends on it. */
  readonly onTask: (result: TaskResult) => void | Promise<void>;
  readonly onProgress?: (progress: SearchProgress) => void;
  /** Aborted: no task is started any more, running ones are given up, the outcome is `interrupted`. */
  readonly signal?: AbortSignal;
  /** Stand-in for `core`'s `evaluate`; only in this thread. */
  readonly evaluate?: Evaluate;
}

/**
 * Pareto front of a problem. `spec.search.evaluations` is a hard cap; the same specification gives the same archive and
 * front to the bit, for any number of workers and any interruption and resumption. Throws on a faulty specification.
 */
export async function search(_spec: ProblemSpec, _options: SearchOptions): Promise<SearchOutcome> {
  throw new Error('the search strategy has not landed yet');
}
