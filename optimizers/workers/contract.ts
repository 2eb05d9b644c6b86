import type { Task, TaskResult } from '../tasks/contract.js';

/** Runs tasks of one problem. */
export interface TaskPool {
  /** How many tasks run at once. */
  readonly size: number;
  /** Rejects when the task throws, the worker dies or the pool was closed. */
  run(task: Task): Promise<TaskResult>;
  /** Gives up running tasks and frees the threads; a second call waits for the same end. */
  close(): Promise<void>;
}
