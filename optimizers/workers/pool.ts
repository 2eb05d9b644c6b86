import { existsSync } from 'node:fs';
import { dirname, join } from 'node:path';
import { fileURLToPath, pathToFileURL } from 'node:url';
import { Worker } from 'node:worker_threads';
import type { ProblemSpec } from '../problem/contract.js';
import type { Task, TaskResult } from '../tasks/contract.js';
import type { TaskPool } from './contract.js';
import { errorOf } from './failure.js';
import type { WorkerMessage, WorkerOrder, WorkerSetup } from './messages.js';
import { OpenBatches } from './sharing.js';

/** A thread cannot load TypeScript: from the sources the built entry is taken. */
function entryUrl(): URL {
  const beside = new URL('./entry.js', import.meta.url);
  if (existsSync(beside)) return beside;
  let folder = dirname(fileURLToPath(import.meta.url));
  while (!existsSync(join(folder, 'package.json')) && dirname(folder) !== folder) folder = dirname(folder);
  const built = join(folder, 'dist', 'optimizers', 'workers', 'entry.js');
  if (!existsSync(built))
    throw new Error(`worker threads need the built ${built}: run "npm run build" first`);
  return pathToFileURL(built);
}

interface Job {
  readonly task: Task;
  readonly resolve: (result: TaskResult) => void;
  readonly reject: (error: Error) => void;
}

/**
 * Threads of one problem. Tasks wait in a queue; a worker that finds it empty helps another one with the designs that
 * its task has still to evaluate.
 */
class Pool implements TaskPool {
  readonly size: number;
  readonly #queue: Job[] = [];
  readonly #running = new Map<Worker, Job>();
  readonly #waiting: Worker[] = [];
  readonly #batches = new OpenBatches<Worker>();
  readonly #idle = new Int32Array(new SharedArrayBuffer(4));
  readonly #workers: readonly Worker[];
  /** Those that have answered and not ended: they hear an order at once. */
  readonly #loaded = new Set<Worker>();
  #broken: Error | null = null;
  #closed: Promise<void> | null = null;

  constructor(spec: ProblemSpec, size: number) {
    const url = entryUrl();
    const workerData: WorkerSetup = { spec, idle: this.#idle };
    this.size = size;
    this.#workers = Array.from({ length: size }, () => {
      const worker = new Worker(url, { workerData });
      worker.on('message', (message: WorkerMessage) => this.#hear(worker, message));
      worker.on('error', (error) => this.#break(new Error(`a worker thread failed: ${error.message}`)));
      worker.on('exit', (code) => {
        this.#loaded.delete(worker);
        this.#break(new Error(`a worker thread ended unexpectedly (exit code ${code})`));
      });
      return worker;
    });
    this.#waiting.push(...this.#workers);
  }

  run(task: Task): Promise<TaskResult> {
    return new Promise((resolve, reject) => {
      if (this.#broken !== null) return reject(this.#broken);
      this.#queue.push({ task, resolve, reject });
      this.#feed();
    });
  }

  close(): Promise<void> {
    this.#closed ??= this.#close();
    return this.#closed;
  }

  /** Stopping a thread from here takes this one as long as it takes that one: those that can are asked to leave. */
  async #close(): Promise<void> {
    this.#break(new Error('the pool is closed'));
    const leave: WorkerOrder = { kind: 'leave' };
    const ends = this.#workers.map(async (worker) => {
      if (!this.#waiting.includes(worker) || !this.#loaded.has(worker)) return worker.terminate();
      const ended = new Promise((done) => worker.once('exit', done));
      worker.postMessage(leave);
      return ended;
    });
    await Promise.all(ends);
  }

  #hear(worker: Worker, message: WorkerMessage): void {
    const job = this.#running.get(worker);
    if (message.kind !== 'broken') this.#loaded.add(worker);
    switch (message.kind) {
      case 'done':
        job?.resolve(message.result);
        break;
      case 'failed':
        job?.reject(errorOf(message.failure, `task ${job.task.id}`));
        break;
      case 'broken':
        this.#break(errorOf(message.failure, 'a worker thread failed'));
        return;
      case 'share':
        this.#batches.open(worker, message.batch);
        this.#feed();
        return;
    }
    this.#running.delete(worker);
    this.#waiting.push(worker);
    this.#feed();
  }

  /** Tasks first, then help. */
  #feed(): void {
    while (this.#waiting.length > 0 && this.#broken === null) {
      const job = this.#queue.shift();
      const batch = job === undefined ? this.#batches.any() : null;
      if (job === undefined && batch === null) break;
      const worker = this.#waiting.pop()!;
      if (job !== undefined) this.#running.set(worker, job);
      const order: WorkerOrder =
        job !== undefined ? { kind: 'run', task: job.task } : { kind: 'help', batch: batch! };
      worker.postMessage(order);
    }
    Atomics.store(this.#idle, 0, this.#waiting.length);
  }

  #break(error: Error): void {
    this.#broken ??= error;
    for (const job of [...this.#running.values(), ...this.#queue.splice(0)]) job.reject(this.#broken);
    this.#running.clear();
  }
}

/** Runs tasks on `size` worker threads, each with its own copy of the problem. */
export function workerPool(spec: ProblemSpec, size: number): TaskPool {
  return new Pool(spec, size);
}
