import type { ProblemSpec } from '../problem/contract.js';
import type { Task, TaskResult } from '../tasks/contract.js';
import type { Failure } from './failure.js';
import type { SharedBatch } from './shared-batch.js';

/** What a worker thread is started with. */
export interface WorkerSetup {
  readonly spec: ProblemSpec;
  /** One number, shared by all threads of a pool: how many workers have nothing to do. */
  readonly idle: Int32Array;
}

/** What a worker is told. */
export type WorkerOrder =
  | { readonly kind: 'run'; readonly task: Task }
  | { readonly kind: 'help'; readonly batch: SharedBatch }
  /** To end by itself. */
  | { readonly kind: 'leave' };

/** What a worker answers; `share` may come while it runs a task. */
export type WorkerMessage =
  | { readonly kind: 'done'; readonly result: TaskResult }
  | { readonly kind: 'failed'; readonly failure: Failure }
  | { readonly kind: 'share'; readonly batch: SharedBatch }
  | { readonly kind: 'helped' }
  /** Not even the problem can be built. */
  | { readonly kind: 'broken'; readonly failure: Failure };
