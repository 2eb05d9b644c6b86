import type { EvaluateGradient } from '../core/gradient.js';
import type { ProblemSpec } from './problem/contract.js';
import { judge } from './problem/judge.js';
import { createProblem, type Evaluate } from './problem/problem.js';
import { Knowledge, type Stage } from './stages/contract.js';
import { planWithCorrection } from './stages/correct.js';
import { type Milestone, outcomeOf, type SearchOutcome } from './stages/outcome.js';
import type { Task, TaskResult } from './tasks/contract.js';
import type { TaskPool } from './workers/contract.js';
import { evaluateExactly, evaluateForSearch, gradientForSearch } from './workers/evaluate.js';
import { serialPool } from './workers/serial.js';
import { taskPool } from './workers/task-pool.js';

export interface SearchProgress {
  readonly stage: string;
  readonly tasksDone: number;
  readonly tasksTotal: number;
  readonly evaluations: number;
  readonly budget: number;
  /** Least impurity at the brightness asked for, or at the brightest point so far when no level is set. */
  readonly best: { readonly brightness: number; readonly impurity: number } | null;
}

export interface SearchOptions {
  /** Worker threads; 0 or 1 = in this thread. */
  readonly workers: number;
  /** Runs the tasks in place of threads of the search's own; closed by the search only where it is aborted. */
  readonly pool?: TaskPool;
  /** Finished tasks of an earlier run, from the ledger, by id. */
  readonly completed: ReadonlyMap<string, TaskResult>;
  /**
   * Called once per newly finished task. The search does not wait for it but at its own end, and fails soon after it
   * does: a task that is lost this way is computed again, with the same result.
   */
  readonly onTask: (result: TaskResult) => void | Promise<void>;
  readonly onProgress?: (progress: SearchProgress) => void;
  /** Aborted: no task is started any more, running ones are given up, the outcome is `interrupted`. */
  readonly signal?: AbortSignal;
  /** Stand-in for `core`'s `evaluate`; only in this thread. */
  readonly evaluate?: Evaluate;
  /** Stand-in for `core`'s exact derivatives beside `evaluate`; left out: a stand-in has none. */
  readonly evaluateGradient?: EvaluateGradient;
}

/** State of the run that progress and the outcome are told from. */
interface Run {
  readonly known: Knowledge;
  readonly pool: TaskPool;
  readonly options: SearchOptions;
  readonly saves: Saves;
  readonly milestones: Milestone[];
}

/** Finished tasks on their way to the disk: the search goes on meanwhile. */
class Saves {
  readonly #onTask: SearchOptions['onTask'];
  readonly #pending = new Set<Promise<void>>();
  #failure: { readonly error: unknown } | null = null;

  constructor(onTask: SearchOptions['onTask']) {
    this.#onTask = onTask;
  }

  /** Throws when an earlier one has failed. */
  add(result: TaskResult): void {
    this.#check();
    const save = (async () => this.#onTask(result))().catch((error: unknown) => {
      this.#failure ??= { error };
    });
    this.#pending.add(save);
    void save.then(() => this.#pending.delete(save));
  }

  /** Waits for all; throws when one has failed. */
  async settle(): Promise<void> {
    await Promise.all(this.#pending);
    this.#check();
  }

  #check(): void {
    if (this.#failure !== null) throw this.#failure.error;
  }
}

function bestSoFar(known: Knowledge, results: readonly (TaskResult | null)[]): SearchProgress['best'] {
  const { goal } = known.spec;
  const late = results.flatMap((result) => result?.points ?? []).map((point) => judge(point.figures, goal));
  const all = [...known.front, ...late];
  if (all.length === 0) return null;
  const level = goal.atLeast ?? all.reduce((most, point) => Math.max(most, point.brightness), 0);
  const bright = all.filter((point) => point.brightness >= level);
  if (bright.length === 0) return null;
  const { brightness, impurity } = bright.reduce((best, point) =>
    point.impurity < best.impurity ? point : best,
  );
  return { brightness, impurity };
}

/**
 * Runs the tasks of a stage that the ledger does not hold, as many at once as the pool has room for. Results stand in
 * task order whatever the order of their ends; null where an abort came first. Rejects with the first failure.
 */
async function runStage(run: Run, stage: Stage): Promise<(TaskResult | null)[]> {
  const { known, pool, options, saves } = run;
  const results = stage.tasks.map((task) => options.completed.get(task.id) ?? null);
  const missing = [...results.keys()].filter((i) => results[i] === null);
  // The longest first: what is left at the end of a stage is then soon done.
  const waiting = missing.sort((a, b) => stage.tasks[b].budget - stage.tasks[a].budget);
  const report = () => {
    const done = results.filter((result) => result !== null);
    const evaluations = done.reduce((sum, result) => sum + result.evaluations, known.spent);
    const counts = { tasksDone: done.length, tasksTotal: results.length };
    const { evaluations: budget } = known.spec.search;
    options.onProgress?.({
      stage: stage.name,
      ...counts,
      evaluations,
      budget,
      best: bestSoFar(known, results),
    });
  };
  const aborted = () => options.signal?.aborted === true;
  const lane = async () => {
    for (let i = waiting.shift(); i !== undefined && !aborted(); i = waiting.shift()) {
      const result = await pool.run(stage.tasks[i]);
      if (aborted()) return;
      saves.add(result);
      results[i] = result;
      report();
    }
  };
  report();
  const lanes = Array.from({ length: Math.min(pool.size, waiting.length) }, lane);
  await Promise.all(lanes).catch((error: unknown) => {
    waiting.length = 0;
    if (!aborted()) throw error;
  });
  return results;
}

/** Merges a stage's results in task order. */
function merge(known: Knowledge, results: readonly (TaskResult | null)[]): void {
  for (const result of results) {
    if (result === null) continue;
    known.absorb(result);
    known.spent += result.evaluations;
  }
}

function checkCap(known: Knowledge, tasks: readonly Task[]): void {
  const asked = tasks.reduce((sum, task) => sum + task.budget, 0);
  if (asked > known.left) throw new Error(`a stage asked for ${asked} evaluations; ${known.left} are left`);
}

async function carryOut(run: Run): Promise<'finished' | 'interrupted'> {
  const { known, milestones, options } = run;
  const steps = planWithCorrection(known);
  for (let step = steps.next(); !step.done; ) {
    const stage = step.value;
    checkCap(known, stage.tasks);
    if (options.signal?.aborted) return 'interrupted';
    const before = known.spent;
    const results = await runStage(run, stage);
    merge(known, results);
    const evaluations = known.spent - before;
    milestones.push({
      name: stage.name,
      tasks: stage.tasks.length,
      evaluations,
      front: known.archive.points,
    });
    const complete = results.filter((result) => result !== null);
    if (complete.length < results.length) return 'interrupted';
    step = steps.next(complete);
  }
  return 'finished';
}

/**
 * Pareto front of a problem. `spec.search.evaluations` is a hard cap; the same specification gives the same archive and
 * front to the bit, for any number of workers and any interruption and resumption. Throws on a faulty specification,
 * when a task fails and when a worker dies.
 */
export async function search(spec: ProblemSpec, options: SearchOptions): Promise<SearchOutcome> {
  const problem =
    options.evaluate === undefined
      ? createProblem(spec, evaluateForSearch, gradientForSearch, undefined, evaluateExactly)
      : createProblem(spec, options.evaluate, options.evaluateGradient ?? null);
  const own = options.pool === undefined;
  const here = options.evaluate !== undefined;
  const pool = options.pool ?? (here ? serialPool(spec, problem) : taskPool(spec, options.workers));
  const saves = new Saves(options.onTask);
  const run: Run = { known: new Knowledge(spec, problem), pool, options, saves, milestones: [] };
  const stop = () => void pool.close();
  options.signal?.addEventListener('abort', stop, { once: true });
  try {
    const kind = await carryOut(run);
    await saves.settle();
    return outcomeOf(kind, run.known, run.milestones);
  } finally {
    options.signal?.removeEventListener('abort', stop);
    if (own) await pool.close();
  }
}
