import type { ProblemSpec } from '../problem/contract.js';
import type { Problem } from '../problem/problem.js';
import type { Task, TaskResult } from '../tasks/contract.js';
import { type JudgedPoint, NearestPoint, PointArchive } from '../tasks/recorder.js';
import type { Solution } from '../tasks/solve.js';

/** Tasks that may run side by side. */
export interface Stage {
  readonly name: string;
  readonly tasks: readonly Task[];
}

/**
 * A plan yields one stage after the other and is sent the results of all its tasks, in task order. It is a pure
 * function of the specification and of those results, so neither the number of workers nor an interruption shows.
 */
export type Plan<T = void> = Generator<Stage, T, readonly TaskResult[]>;

/** What a plan knows so far. */
export class Knowledge {
  readonly spec: ProblemSpec;
  readonly problem: Problem;
  readonly archive = new PointArchive();
  /** The evaluation nearest to the limits of the goal among tasks in which none met them. */
  readonly nearest = new NearestPoint();
  /** Ends of all solves. */
  readonly solutions: Solution[] = [];
  /** Populations of the islands, by island. */
  islands: (readonly (readonly number[])[])[] = [];
  /** Evaluations spent in finished stages. */
  spent = 0;
  #tasks = 0;

  constructor(spec: ProblemSpec, problem: Problem) {
    this.spec = spec;
    this.problem = problem;
  }

  get left(): number {
    return this.spec.search.evaluations - this.spent;
  }

  get front(): JudgedPoint[] {
    return this.archive.points;
  }

  /** A task with the next stable index. */
  task(stage: string, kind: string, budget: number, input: unknown): Task {
    const index = this.#tasks++;
    return { id: `${index}-${stage}`, kind, index, budget, input };
  }
}

/** Largest distance along a coordinate; infinite between different entries of a list. */
export function distance(problem: Problem, a: readonly number[], b: readonly number[]): number {
  return a.reduce((worst, value, k) => {
    const apart = Math.abs(value - b[k]);
    return Math.max(
      worst,
      problem.space.categories[k] > 0 && apart > 1e-9 ? Number.POSITIVE_INFINITY : apart,
    );
  }, 0);
}

/** Points of one branch lie closer than this. */
export const BRANCH_WIDTH = 0.15;

/** Splits `total` into `parts` whole numbers that differ by at most one. */
export function split(total: number, parts: number): number[] {
  return Array.from(
    { length: parts },
    (_, i) => Math.floor((total * (i + 1)) / parts) - Math.floor((total * i) / parts),
  );
}

/** Brightness range of interest: what the goal asks for, open ends from what the archive reaches. */
export function rangeOfInterest(known: Knowledge): { from: number; to: number } | null {
  const { goal } = known.spec;
  const { front } = known;
  if (front.length === 0) return null;
  const brightest = front[front.length - 1].brightness;
  // A front over the reachable range would begin in the dark: its lowest hundredth is not worth a search.
  const from = goal.front.from ?? Math.max(front[0].brightness, 0.01 * brightest);
  const to = Math.min(goal.front.to ?? brightest, 1.02 * brightest);
  return from < to ? { from, to } : { from: to, to };
}
