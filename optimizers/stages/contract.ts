import { GRADIENT_COST } from '../local/contract.js';
import type { ProblemSpec } from '../problem/contract.js';
import { judge } from '../problem/judge.js';
import type { Problem } from '../problem/problem.js';
import { goalWithin } from '../problem/third.js';
import type { Task, TaskResult } from '../tasks/contract.js';
import type { Correction } from '../tasks/correct.js';
import { type JudgedPoint, NearestPoint, PointArchive } from '../tasks/recorder.js';
import type { Solution } from '../tasks/solve.js';
import type { Restarts } from './restarts.js';

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

/** A front corrected by the exact phonon method. */
export interface CorrectedFront {
  /** Levels of the front that was corrected. */
  readonly levels: readonly number[];
  /** Of the search before, whose solves do not compare with what followed. */
  readonly restarts: { readonly all: Restarts | null; readonly best: Restarts | null };
  readonly corrections: readonly Correction[];
}

/** What a plan knows so far. */
export class Knowledge {
  readonly spec: ProblemSpec;
  readonly problem: Problem;
  /** Non-dominated in every objective of the goal. */
  archive: PointArchive;
  /** Bounds of the slices of a front with three objectives, once they are chosen: see `sliceBounds`. */
  bounds: readonly (number | null)[] | null = null;
  /** The evaluation nearest to the limits of the goal among tasks in which none met them. */
  readonly nearest = new NearestPoint();
  /** Ends of all solves. */
  readonly solutions: Solution[] = [];
  /** Populations of the islands, by island. */
  islands: (readonly (readonly number[])[])[] = [];
  /** Evaluations spent in finished stages. */
  spent = 0;
  /** Evaluations kept back for the end of the search. */
  reserved = 0;
  /** What became of the front when it was corrected by the exact phonon method; null where it was not. */
  corrected: CorrectedFront | null = null;
  /** Whether exact derivatives are worth asking for: the problem has them, and solves have had them. */
  exact: boolean;
  /** The archive by impurity and brightness alone. */
  #flat: PointArchive;
  #tasks = 0;
  #parent: { readonly known: Knowledge; readonly name: string } | null = null;

  constructor(spec: ProblemSpec, problem: Problem) {
    this.spec = spec;
    this.problem = problem;
    this.#flat = new PointArchive(true);
    this.archive = spec.goal.third === null ? this.#flat : new PointArchive();
    this.exact = problem.differentiate !== null;
  }

  /** Evaluations of one iteration of a solve: a value and its derivatives. */
  get iterationCost(): number {
    return 1 + (this.exact ? GRADIENT_COST : this.problem.space.dimension);
  }

  /** Takes in where solves ended. */
  learn(solutions: readonly Solution[]): void {
    this.solutions.push(...solutions);
    if (solutions.length > 0) this.exact &&= solutions.some(({ exact }) => exact);
  }

  get left(): number {
    return this.spec.search.evaluations - this.spent - this.reserved;
  }

  /** The members of the archive that none beats in impurity and brightness, by brightness. */
  get front(): JudgedPoint[] {
    return this.#flat.points;
  }

  /** Takes in what a task found; its evaluations count when its stage is over. */
  absorb({ id, points, nearest }: TaskResult): void {
    const { goal } = this.spec;
    const stage = id.slice(id.indexOf('-') + 1);
    for (const { values, figures } of points) {
      const { impurity, brightness, third, violation } = judge(figures, goal);
      // Tasks know the limits of the whole search only.
      if (violation === 0) this.add({ values, figures, impurity, brightness, third, stage });
    }
    if (nearest !== undefined) this.nearest.offer(nearest, judge(nearest.figures, goal).violation);
  }

  /** Empties the archive: what follows is judged by another method. */
  forget(): void {
    this.#flat = new PointArchive(true);
    this.archive = this.spec.goal.third === null ? this.#flat : new PointArchive();
  }

  private add(point: JudgedPoint): void {
    this.#flat.add(point);
    if (this.archive !== this.#flat) this.archive.add(point);
  }

  /** What is known within a slice, for a search of its own on two objectives with `budget` evaluations. */
  within(bound: number | null, name: string, budget: number, seed: number): Knowledge {
    const { spec, problem } = this;
    const goal = goalWithin(spec.goal, bound);
    const search = { ...spec.search, evaluations: budget, seed };
    const inner = new Knowledge({ ...spec, goal, search }, problem.withGoal(goal));
    inner.#parent = { known: this, name };
    inner.exact = this.exact;
    for (const point of this.archive.points) {
      if (judge(point.figures, goal).violation === 0) inner.add({ ...point, third: null });
    }
    return inner;
  }

  /** A task with the next stable index. */
  task(stage: string, kind: string, budget: number, input: unknown): Task {
    if (this.#parent !== null) {
      const { known, name } = this.#parent;
      return known.task(`${name}/${stage}`, kind, budget, input);
    }
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
