import { existsSync } from 'node:fs';
import { dirname, join } from 'node:path';
import { fileURLToPath, pathToFileURL } from 'node:url';
import { Worker } from 'node:worker_threads';
import type { ProblemSpec } from '../problem/contract.js';
import type { Task, TaskResult } from '../tasks/contract.js';
import type { TaskPool } from './contract.js';

/** What a worker answers. */
export type WorkerMessage =
  | { readonly kind: 'done'; readonly result: TaskResult }
  | { readonly kind: 'failed'; readonly id: string; readonly message: string };

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

/** Runs tasks on `size` worker threads, each with its own copy of the problem. */
export function workerPool(spec: ProblemSpec, size: number): TaskPool {
  const url = entryUrl();
  const queue: Job[] = [];
  const running = new Map<Worker, Job>();
  const idle: Worker[] = [];
  let broken: Error | null = null;

  const breakAll = (error: Error) => {
    broken ??= error;
    for (const job of [...running.values(), ...queue.splice(0)]) job.reject(broken);
    running.clear();
  };
  const feed = () => {
    while (idle.length > 0 && queue.length > 0) {
      const worker = idle.pop()!;
      const job = queue.shift()!;
      running.set(worker, job);
      worker.postMessage(job.task);
    }
  };
  const workers = Array.from({ length: size }, () => {
    const worker = new Worker(url, { workerData: spec });
    worker.on('message', (message: WorkerMessage) => {
      const job = running.get(worker);
      if (job === undefined) return;
      running.delete(worker);
      idle.push(worker);
      if (message.kind === 'done') job.resolve(message.result);
      else job.reject(new Error(message.message));
      feed();
    });
    worker.on('error', (error) => breakAll(new Error(`a worker thread failed: ${error.message}`)));
    worker.on('exit', (code) =>
      breakAll(new Error(`a worker thread ended unexpectedly (exit code ${code})`)),
    );
    idle.push(worker);
    return worker;
  });

  return {
    size,
    run: (task) =>
      new Promise((resolve, reject) => {
        if (broken !== null) return reject(broken);
        queue.push({ task, resolve, reject });
        feed();
      }),
    async close() {
      breakAll(new Error('the pool is closed'));
      await Promise.all(workers.map((worker) => worker.terminate()));
    },
  };
}
